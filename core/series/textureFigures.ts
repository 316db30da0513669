/** Luma of a picture in 8-bit steps (0…255), rows without padding. */
export interface LumaPicture {
  widthPx: number;
  heightPx: number;
  luma: Uint8ClampedArray;
}

/** Sums over a picture, from which its texture figures are taken. */
export interface TextureSums {
  pixels: number;
  flat: number;
  runs: number;
  steps: number;
  aligned: number;
  energy: number;
}

export const noTexture: TextureSums = { pixels: 0, flat: 0, runs: 0, steps: 0, aligned: 0, energy: 0 };

/** Two neighbours that differ by this much, in 8-bit steps, belong to two planes. */
const planeStep = 3;
/** Side of the squares over which the direction of strokes is judged; rows are added by so many. */
export const blockPx = 8;

/**
 * Adds rows: flat pixels (|∇| of 8-bit luma below one step, central differences), runs of one tone along rows and
 * columns, and how far gradients share a direction within squares (the structure tensor's coherence, weighted with
 * its energy).
 * @param picture not modified
 * @param top a multiple of `blockPx`
 */
export function addRows(sums: TextureSums, picture: LumaPicture, top: number, bottom: number): TextureSums {
  const { widthPx, heightPx, luma } = picture;
  let { pixels, flat, runs, steps, aligned, energy } = sums;
  const end = Math.min(bottom + 1, heightPx - 1);
  for (let y0 = top + 1; y0 < end; y0 += blockPx)
    for (let x0 = 1; x0 < widthPx - 1; x0 += blockPx) {
      let [e, f, g] = [0, 0, 0];
      for (let y = y0; y < Math.min(y0 + blockPx, end); y++)
        for (let x = x0; x < Math.min(x0 + blockPx, widthPx - 1); x++) {
          const i = y * widthPx + x;
          const gx = (luma[i + 1] - luma[i - 1]) / 2;
          const gy = (luma[i + widthPx] - luma[i - widthPx]) / 2;
          pixels++;
          if (gx * gx + gy * gy < 1) flat++;
          if (Math.abs(luma[i + 1] - luma[i]) >= planeStep) runs++;
          if (Math.abs(luma[i + widthPx] - luma[i]) >= planeStep) runs++;
          steps += 2;
          e += gx * gx;
          f += gx * gy;
          g += gy * gy;
        }
      aligned += Math.hypot(e - g, 2 * f);
      energy += e + g;
    }
  return { pixels, flat, runs, steps, aligned, energy };
}

/**
 * @param mmPerPx of the picture, on the print
 * @param longestMm what a plane without end counts as
 */
export function textureOf(sums: TextureSums, mmPerPx: number, longestMm: number) {
  return {
    flatShare01: sums.pixels > 0 ? sums.flat / sums.pixels : 1,
    planeMm: Math.min(longestMm, (sums.steps / Math.max(1, sums.runs)) * mmPerPx),
    coherence01: sums.energy > 0 ? sums.aligned / sums.energy : 0,
  };
}
