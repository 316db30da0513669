import { type ReferenceImage, sampleAt } from './referenceImage.ts';

/** Luma weights of ITU-R BT.709 rounded to 1/4096, as the kernel uses them. */
export const lumaWeights = [871 / 4096, 2929 / 4096, 296 / 4096] as const;

/** |I∗N| of the luma at every pixel but the outermost, row by row. */
function laplacianDifferences(image: ReferenceImage): Float64Array {
  const luma = (x: number, y: number) =>
    image.channels === 1
      ? sampleAt(image, x, y)
      : lumaWeights.reduce((sum, weight, c) => sum + weight * sampleAt(image, x, y, c), 0);
  const mask = [
    [1, -2, 1],
    [-2, 4, -2],
    [1, -2, 1],
  ];
  const sizes: number[] = [];
  for (let y = 1; y < image.heightPx - 1; y++)
    for (let x = 1; x < image.widthPx - 1; x++) {
      let sum = 0;
      for (let dy = -1; dy <= 1; dy++)
        for (let dx = -1; dx <= 1; dx++) sum += mask[dy + 1][dx + 1] * luma(x + dx, y + dy);
      sizes.push(Math.abs(sum));
    }
  return Float64Array.from(sizes);
}

/**
 * Immerkær 1996: σ = √(π/2) / (6(W−2)(H−2)) · Σ|I∗N|.
 * @param image R, G, B or one channel; not modified
 * @returns standard deviation of the luma's noise, in the picture's unit
 */
export function noiseMeanReference(image: ReferenceImage): number {
  const sizes = laplacianDifferences(image);
  return (Math.sqrt(Math.PI / 2) / (6 * sizes.length)) * sizes.reduce((sum, size) => sum + size, 0);
}

/** The robust form: median|I∗N| / (6 · 0.67449), where 0.67449 is the median of |z| for normal z. */
export function noiseMedianReference(image: ReferenceImage): number {
  const sizes = laplacianDifferences(image).sort();
  const middle = (sizes.length - 1) / 2;
  return (sizes[Math.floor(middle)] + sizes[Math.ceil(middle)]) / 2 / (6 * 0.67449);
}
