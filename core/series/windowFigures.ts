/** A piece of luma in 8-bit steps (0…255, not rounded), rows without padding. */
export interface LumaWindow {
  widthPx: number;
  heightPx: number;
  luma: Float64Array;
}

/** Sums over the windows of a frame, from which its texture figures are taken. */
export interface WindowSums {
  pixels: number;
  flat: number;
  runs: number;
  steps: number;
  aligned: number;
  energy: number;
}

export const noWindows: WindowSums = { pixels: 0, flat: 0, runs: 0, steps: 0, aligned: 0, energy: 0 };

/** Two neighbours that differ by this much, in 8-bit steps, belong to two planes. */
const planeStep = 3;
/** Side of the squares over which the direction of strokes is judged. */
const blockPx = 8;

/**
 * Adds one window: flat pixels (|∇| of 8-bit luma below one step, central differences), runs of one tone along rows
 * and columns, and how far gradients share a direction within squares (the structure tensor's coherence, weighted
 * with its energy).
 */
export function addWindow(sums: WindowSums, window: LumaWindow): WindowSums {
  const { widthPx, heightPx } = window;
  const luma = window.luma.map(Math.round);
  let { pixels, flat, runs, steps, aligned, energy } = sums;
  for (let y0 = 1; y0 < heightPx - 1; y0 += blockPx)
    for (let x0 = 1; x0 < widthPx - 1; x0 += blockPx) {
      let [e, f, g] = [0, 0, 0];
      for (let y = y0; y < Math.min(y0 + blockPx, heightPx - 1); y++)
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
 * @param mmPerPx of the windows, on the print
 * @param longestMm what a plane without end counts as: the windows' own size
 */
export function textureOf(sums: WindowSums, mmPerPx: number, longestMm: number) {
  return {
    flatShare01: sums.pixels > 0 ? sums.flat / sums.pixels : 1,
    planeMm: Math.min(longestMm, (sums.steps / Math.max(1, sums.runs)) * mmPerPx),
    coherence01: sums.energy > 0 ? sums.aligned / sums.energy : 0,
  };
}
