import { blankImage, type ReferenceImage, sampleAt } from './referenceImage.ts';

/** How a painted coarser level enters a finer one. */
export interface MergeRule {
  /** σ_r: how like the pixel a coarse neighbour must be, about 0.05. */
  sigmaRange: number;
  /** τ, hold: how far from the coarse paint a pixel may lie before it is kept, about 0.25. */
  hold: number;
}

/** Spatial Gaussian over the coarse neighbours, in coarse pixels. */
const sigmaCoarsePx = 0.75;

/**
 * Merge, coarse to fine, with joint bilateral upsampling (Kopf, Cohen, Lischinski, Uyttendaele 2007) as the rule:
 * u = Σ w_n F'_n / Σ w_n over 3 × 3 coarse neighbours, w_n = exp(−d_n²/(2·0.75²) − |g − F'_n|²/(2σ_r²));
 * β = 1/(1 + (min_n |g − F'_n|²/τ²)²); the result is βu + (1 − β)g.
 * Fine pixel x has its centre at (x + ½)/2 − ½ of the coarse grid; the neighbours are those around coarse pixel
 * ⌊x/2⌋. Where every w_n is negligible β is too. Border of the coarse level: replicate.
 * @param painted g, the painted pixels of this level: R, G, B; not modified
 * @param coarse F', the painted coarser level, half the size rounded up; not modified
 */
export function mergeReference(
  painted: ReferenceImage,
  coarse: ReferenceImage,
  rule: MergeRule,
): ReferenceImage {
  const result = blankImage(painted.widthPx, painted.heightPx, 3);
  for (let y = 0; y < painted.heightPx; y++)
    for (let x = 0; x < painted.widthPx; x++) {
      const g = [0, 1, 2].map((c) => sampleAt(painted, x, y, c));
      const merged = mergePixel(g, coarse, x, y, rule);
      result.values.set(merged, (y * painted.widthPx + x) * 3);
    }
  return result;
}

function mergePixel(g: number[], coarse: ReferenceImage, x: number, y: number, rule: MergeRule): number[] {
  const nearX = Math.floor(x / 2);
  const nearY = Math.floor(y / 2);
  const neighbours = [];
  for (let row = nearY - 1; row <= nearY + 1; row++)
    for (let column = nearX - 1; column <= nearX + 1; column++) {
      const colour = [0, 1, 2].map((c) => sampleAt(coarse, column, row, c));
      const dx = (x + 0.5) / 2 - 0.5 - column;
      const dy = (y + 0.5) / 2 - 0.5 - row;
      const difference = colour.reduce((sum, value, c) => sum + (value - g[c]) ** 2, 0);
      const exponent =
        (dx * dx + dy * dy) / (2 * sigmaCoarsePx ** 2) + difference / (2 * rule.sigmaRange ** 2);
      neighbours.push({ colour, difference, exponent });
    }
  // A common factor of the weights cancels; taking out the largest keeps them from vanishing together.
  const least = Math.min(...neighbours.map(({ exponent }) => exponent));
  const u = [0, 0, 0];
  let sumOfWeights = 0;
  for (const { colour, exponent } of neighbours) {
    const weight = Math.exp(least - exponent);
    sumOfWeights += weight;
    for (let c = 0; c < 3; c++) u[c] += weight * colour[c];
  }
  const nearest = Math.min(...neighbours.map(({ difference }) => difference));
  const beta = 1 / (1 + (nearest / rule.hold ** 2) ** 2);
  return g.map((value, c) => (beta * u[c]) / sumOfWeights + (1 - beta) * value);
}
