// W3C Compositing and Blending Level 1, written from its text alone: section 9.1 (Porter-Duff operators), section 10
// (blend modes, separable). One pixel at a time, in doubles.

/** Straight R, G, B and alpha, each 0…1. */
export type Pixel = readonly [red: number, green: number, blue: number, alpha: number];

type Blend = (backdrop: number, source: number) => number;

const multiply: Blend = (cb, cs) => cb * cs;
const screen: Blend = (cb, cs) => cb + cs - cb * cs;
const hardLight: Blend = (cb, cs) => (cs <= 0.5 ? multiply(cb, 2 * cs) : screen(cb, 2 * cs - 1));

function softLight(cb: number, cs: number): number {
  if (cs <= 0.5) return cb - (1 - 2 * cs) * cb * (1 - cb);
  const d = cb <= 0.25 ? ((16 * cb - 12) * cb + 4) * cb : Math.sqrt(cb);
  return cb + (2 * cs - 1) * (d - cb);
}

function colourBurn(cb: number, cs: number): number {
  if (cb === 1) return 1;
  return cs === 0 ? 0 : 1 - Math.min(1, (1 - cb) / cs);
}

function colourDodge(cb: number, cs: number): number {
  if (cb === 0) return 0;
  return cs === 1 ? 1 : Math.min(1, cb / (1 - cs));
}

const blends: Record<string, Blend> = {
  'src-over': (_, cs) => cs,
  multiply,
  screen,
  overlay: (cb, cs) => hardLight(cs, cb),
  darken: Math.min,
  lighten: Math.max,
  'color-dodge': colourDodge,
  'color-burn': colourBurn,
  'hard-light': hardLight,
  'soft-light': softLight,
};

/** Names of the operators, as OpenRaster (`svg:` left off) and this document have them. */
export const operators = [...Object.keys(blends), 'dst-out'];

/**
 * Lays a source over a backdrop.
 * @param operator a blend mode, composited by source-over, or `dst-out`
 */
export function laidOver(backdrop: Pixel, source: Pixel, operator: string): Pixel {
  const [alphaB, alphaS] = [backdrop[3], source[3]];
  if (operator === 'dst-out') return [backdrop[0], backdrop[1], backdrop[2], alphaB * (1 - alphaS)];
  const blend = blends[operator];
  if (!blend) throw new RangeError(`Expected one of ${operators.join(', ')}, received ${operator}`);
  const alpha = alphaS + alphaB * (1 - alphaS);
  const channel = (k: number) => {
    const mixed = (1 - alphaB) * source[k] + alphaB * blend(backdrop[k], source[k]);
    const premultiplied = alphaS * mixed + alphaB * backdrop[k] * (1 - alphaS);
    return alpha === 0 ? 0 : premultiplied / alpha;
  };
  return [channel(0), channel(1), channel(2), alpha];
}
