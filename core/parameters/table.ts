/**
 * The one definition of every parameter. Command line help and validation, the interface, the stored
 * formats and the docs are all made from this table.
 */

export type Stratum = 'ground' | 'body' | 'line' | 'relief';

interface Common {
  /** Which stratum the parameter belongs to. */
  stratum: Stratum;
  /** Short name in painters' words. */
  label: string;
  /** One plain sentence. */
  help: string;
}

/** A plain number in `min`…`max`. `percent` numbers are stored as 0…1 and shown as 0…100 %. */
export interface NumberParameter extends Common {
  kind: 'number';
  min: number;
  max: number;
  step: number;
  default: number;
  unit: 'none' | 'percent' | 'degrees';
  /** Whole numbers only. */
  whole?: boolean;
}

/** A length with its unit: `4.5mm` on the print, `64px` of the full-resolution photo, `12permille` of its long edge. */
export interface LengthParameter extends Common {
  kind: 'length';
  /** Bounds for each unit. */
  min: Record<LengthUnit, number>;
  max: Record<LengthUnit, number>;
  step: Record<LengthUnit, number>;
  default: LengthText;
}

/** Either the word `auto` (measured on the photo) or a number in `min`…`max`. */
export interface AutoNumberParameter extends Common {
  kind: 'autoNumber';
  min: number;
  max: number;
  step: number;
  default: 'auto' | number;
  unit: 'none';
}

export interface ChoiceParameter extends Common {
  kind: 'choice';
  choices: readonly { value: string; label: string; help: string }[];
  default: string;
}

/** An encoded colour written `#rrggbb`. */
export interface ColourParameter extends Common {
  kind: 'colour';
  default: string;
}

export type Parameter =
  | NumberParameter
  | LengthParameter
  | AutoNumberParameter
  | ChoiceParameter
  | ColourParameter;

export type LengthUnit = 'mm' | 'px' | 'permille';
export type LengthText = `${number}${LengthUnit}`;

const strength = (stratum: Stratum, help: string, value: number): NumberParameter => ({
  kind: 'number',
  stratum,
  label: 'Strength',
  help,
  unit: 'percent',
  min: 0,
  max: 1,
  step: 0.01,
  default: value,
});

export const parameterTable = {
  'ground.paper': {
    kind: 'number',
    stratum: 'ground',
    label: 'Paper',
    help: 'How far plain paper covers the photograph before anything is laid over it.',
    unit: 'percent',
    min: 0,
    max: 1,
    step: 0.01,
    default: 0,
  },
  'ground.colour': {
    kind: 'colour',
    stratum: 'ground',
    label: 'Paper colour',
    help: 'The colour of the paper.',
    default: '#f6f1e6',
  },
  'body.strength': strength('body', 'How much of the paint covers the ground.', 1),
  'body.method': {
    kind: 'choice',
    stratum: 'body',
    label: 'Method',
    help: 'How the photograph is turned into paint.',
    choices: [
      {
        value: 'multi-scale',
        label: 'Multi-scale',
        help: 'Broad planes first, then finer touches where the form asks for them.',
      },
      {
        value: 'grain-wise',
        label: 'Grain-wise',
        help: 'One brush, its strokes following the grain of the form.',
      },
      { value: 'sectors', label: 'Sectors', help: 'One round brush with eight sectors.' },
      { value: 'quadrant', label: 'Quadrant', help: 'The classic four-window filter: square, plain planes.' },
      { value: 'bilateral', label: 'Bilateral', help: 'Even, soft smoothing that stops at edges.' },
    ],
    default: 'multi-scale',
  },
  'body.brush': {
    kind: 'length',
    stratum: 'body',
    label: 'Brush',
    help: 'Width of the widest stroke, on the print.',
    min: { mm: 0.1, px: 2, permille: 0.3 },
    max: { mm: 60, px: 1024, permille: 200 },
    step: { mm: 0.1, px: 1, permille: 0.1 },
    default: '3.2mm',
  },
  'body.pull': {
    kind: 'number',
    stratum: 'body',
    label: 'Pull',
    help: 'How far strokes stretch along the form.',
    unit: 'none',
    min: 0,
    max: 2,
    step: 0.05,
    default: 1,
  },
  'body.crispness': {
    kind: 'number',
    stratum: 'body',
    label: 'Crispness',
    help: 'How hard the paint decides between two neighbouring planes.',
    unit: 'none',
    whole: true,
    min: 1,
    max: 16,
    step: 1,
    default: 8,
  },
  'body.hold': {
    kind: 'number',
    stratum: 'body',
    label: 'Hold',
    help: 'How far a detail may be painted over before it is kept: low keeps more, high lets more go.',
    unit: 'none',
    min: 0.02,
    max: 1,
    step: 0.01,
    default: 0.25,
  },
  'body.noiseFloor': {
    kind: 'autoNumber',
    stratum: 'body',
    label: 'Noise floor',
    help: 'Differences smaller than this count as noise; auto measures it on the photograph.',
    unit: 'none',
    min: 0.001,
    max: 0.25,
    step: 0.001,
    default: 'auto',
  },
  'body.coats': {
    kind: 'number',
    stratum: 'body',
    label: 'Coats',
    help: 'How often the broad planes are gone over again.',
    unit: 'none',
    whole: true,
    min: 0,
    max: 6,
    step: 1,
    default: 2,
  },
  'line.strength': strength('line', 'How dark the ink sketch lies over the paint.', 0.7),
  'line.width': {
    kind: 'length',
    stratum: 'line',
    label: 'Ink width',
    help: 'Width of an inked line, on the print.',
    min: { mm: 0.02, px: 1, permille: 0.05 },
    max: { mm: 5, px: 128, permille: 20 },
    step: { mm: 0.02, px: 0.5, permille: 0.05 },
    default: '0.25mm',
  },
  'line.threshold': {
    kind: 'number',
    stratum: 'line',
    label: 'Ink threshold',
    help: 'How readily an edge takes ink: higher inks more.',
    unit: 'none',
    min: 0,
    max: 1,
    step: 0.01,
    default: 0.1,
  },
  'line.softness': {
    kind: 'number',
    stratum: 'line',
    label: 'Ink softness',
    help: 'From a hard pen at 0 to a soft pencil at 1.',
    unit: 'none',
    min: 0,
    max: 1,
    step: 0.01,
    default: 0.2,
  },
  'line.blend': {
    kind: 'choice',
    stratum: 'line',
    label: 'Ink blend',
    help: 'How the ink mixes with the paint beneath it.',
    choices: [
      { value: 'multiply', label: 'Multiply', help: 'Transparent ink: darkens what lies beneath.' },
      { value: 'normal', label: 'Normal', help: 'Opaque ink: covers what lies beneath.' },
      { value: 'darken', label: 'Darken', help: 'Takes the darker of ink and paint.' },
      { value: 'colour-burn', label: 'Colour burn', help: 'Burns the paint darker and richer.' },
      { value: 'soft-light', label: 'Soft light', help: 'A gentle shading in the tone of the paint.' },
      { value: 'overlay', label: 'Overlay', help: 'Deepens darks and keeps lights.' },
      { value: 'screen', label: 'Screen', help: 'For pale ink on dark paint.' },
      { value: 'lighten', label: 'Lighten', help: 'Takes the lighter of ink and paint.' },
      { value: 'hard-light', label: 'Hard light', help: 'Strong ink, strong shading.' },
    ],
    default: 'multiply',
  },
  'line.source': {
    kind: 'choice',
    stratum: 'line',
    label: 'Draw from',
    help: 'What the sketch is drawn from.',
    choices: [
      { value: 'body', label: 'Body', help: 'The painted planes: clean, flowing contours.' },
      { value: 'photo', label: 'Photo', help: 'The photograph: more lines, more texture.' },
    ],
    default: 'body',
  },
  'line.colour': {
    kind: 'colour',
    stratum: 'line',
    label: 'Ink colour',
    help: 'The colour of the ink.',
    default: '#1c1a17',
  },
  'relief.strength': strength('relief', 'How plainly light falls on the surface of the paint.', 0),
  'relief.height': {
    kind: 'number',
    stratum: 'relief',
    label: 'Height',
    help: 'How thick the paint stands: from a thin wash at 0 to paint laid on with a knife at 1.',
    unit: 'none',
    min: 0,
    max: 1,
    step: 0.01,
    default: 0.4,
  },
  'relief.bristle': {
    kind: 'length',
    stratum: 'relief',
    label: 'Bristle',
    help: 'Distance between the marks that the bristles leave, on the print.',
    min: { mm: 0.05, px: 1, permille: 0.1 },
    max: { mm: 8, px: 128, permille: 20 },
    step: { mm: 0.05, px: 0.5, permille: 0.1 },
    default: '0.4mm',
  },
  'relief.bearing': {
    kind: 'number',
    stratum: 'relief',
    label: 'Light from',
    help: 'Where the light comes from: 0 is the top, 90 the right.',
    unit: 'degrees',
    whole: true,
    min: 0,
    max: 359,
    step: 1,
    default: 315,
  },
  'relief.shine': {
    kind: 'number',
    stratum: 'relief',
    label: 'Shine',
    help: 'How glossy the surface is: dry paint at 0, wet varnish at 1.',
    unit: 'none',
    min: 0,
    max: 1,
    step: 0.01,
    default: 0.3,
  },
} as const satisfies Record<string, Parameter>;

export type ParameterKey = keyof typeof parameterTable;
export const parameterKeys = Object.keys(parameterTable) as ParameterKey[];

type ValueOf<P> = P extends { kind: 'number' }
  ? number
  : P extends { kind: 'length' }
    ? LengthText
    : P extends { kind: 'autoNumber' }
      ? 'auto' | number
      : P extends { kind: 'choice'; choices: readonly { value: infer V }[] }
        ? V
        : string;

/** A full set of parameter values: what a state holds and what the engine paints from. */
export type Parameters = { -readonly [K in ParameterKey]: ValueOf<(typeof parameterTable)[K]> };

/** Every parameter at the table's default. */
export function defaultParameters(): Parameters {
  const entries = parameterKeys.map((key) => [key, parameterTable[key].default] as const);
  return Object.fromEntries(entries) as unknown as Parameters;
}
