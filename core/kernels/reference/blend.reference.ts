/** Blend modes of the line, as they are called in the parameter table. */
export const blendModes = [
  'normal',
  'multiply',
  'screen',
  'overlay',
  'darken',
  'lighten',
  'colour-burn',
  'hard-light',
  'soft-light',
] as const;
export type BlendMode = (typeof blendModes)[number];

const multiply = (cb: number, cs: number) => cb * cs;
const screen = (cb: number, cs: number) => cb + cs - cb * cs;
const hardLight = (cb: number, cs: number) => (cs <= 0.5 ? multiply(cb, 2 * cs) : screen(cb, 2 * cs - 1));

function colourBurn(cb: number, cs: number): number {
  if (cb === 1) return 1;
  return cs === 0 ? 0 : 1 - Math.min(1, (1 - cb) / cs);
}

function softLight(cb: number, cs: number): number {
  if (cs <= 0.5) return cb - (1 - 2 * cs) * cb * (1 - cb);
  const d = cb <= 0.25 ? ((16 * cb - 12) * cb + 4) * cb : Math.sqrt(cb);
  return cb + (2 * cs - 1) * (d - cb);
}

const formulas: Record<BlendMode, (cb: number, cs: number) => number> = {
  normal: (_cb, cs) => cs,
  multiply,
  screen,
  overlay: (cb, cs) => hardLight(cs, cb),
  darken: Math.min,
  lighten: Math.max,
  'colour-burn': colourBurn,
  'hard-light': hardLight,
  'soft-light': softLight,
};

/**
 * B(Cb, Cs) of the W3C's Compositing and Blending Level 1, section 10 (separable modes), on one channel.
 * @param backdrop Cb, 0…1
 * @param source Cs, 0…1
 */
export function blendReference(mode: BlendMode, backdrop: number, source: number): number {
  return formulas[mode](backdrop, source);
}

/** Source-over on an opaque backdrop: (1 − αs)·Cb + αs·B(Cb, Cs). */
export function compositeReference(mode: BlendMode, backdrop: number, source: number, alpha: number): number {
  return (1 - alpha) * backdrop + alpha * blendReference(mode, backdrop, source);
}
