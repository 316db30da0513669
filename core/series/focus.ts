/** How much coarser the second scale is. */
const coarser = 4;
/** Share of gradients below the one that is compared: the strong edges of a picture. */
const edgeShare = 0.98;
/** Bins of an 8-bit step. */
const binsPerStep = 4;

/**
 * How crisp a photo's strong edges are: its strong gradients by those of the same photo four times smaller. An edge
 * in focus changes as much from pixel to pixel at both scales (near 1); out of focus it is stretched at the finer
 * one (down to ¼). Exposure, contrast and subject hardly matter, for they change both.
 * @param luma 8-bit steps, rows without padding, at the scale of judging; not modified
 * @returns 0 for a photo without any edge
 */
export function focusOf(luma: Float64Array, widthPx: number, heightPx: number): number {
  const smallWidth = Math.floor(widthPx / coarser);
  const smallHeight = Math.floor(heightPx / coarser);
  const small = new Float64Array(smallWidth * smallHeight);
  for (let y = 0; y < smallHeight * coarser; y++)
    for (let x = 0; x < smallWidth * coarser; x++)
      small[Math.floor(y / coarser) * smallWidth + Math.floor(x / coarser)] +=
        luma[y * widthPx + x] / coarser ** 2;
  const coarse = strongGradient(small, smallWidth, smallHeight);
  return coarse > 0 ? Math.min(1.5, strongGradient(luma, widthPx, heightPx) / coarse) : 0;
}

/** The gradient (central differences) that `edgeShare` of all lie below. */
function strongGradient(luma: Float64Array, widthPx: number, heightPx: number): number {
  const bins = new Uint32Array(256 * binsPerStep);
  let count = 0;
  for (let y = 1; y < heightPx - 1; y++)
    for (let x = 1; x < widthPx - 1; x++) {
      const i = y * widthPx + x;
      const gx = luma[i + 1] - luma[i - 1];
      const gy = luma[i + widthPx] - luma[i - widthPx];
      const size = Math.sqrt(gx * gx + gy * gy) / 2;
      bins[Math.min(bins.length - 1, Math.round(size * binsPerStep))]++;
      count++;
    }
  let below = 0;
  for (let bin = 0; bin < bins.length; bin++) {
    below += bins[bin];
    if (below >= edgeShare * count && below > 0) return bin / binsPerStep;
  }
  return 0;
}
