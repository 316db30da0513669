import { blankImage, type ReferenceImage, sampleAt } from './referenceImage.ts';

/**
 * Bilateral smoothing as written by Tomasi and Manduchi (1998): round window, spatial Gaussian σ_d = radius / 2,
 * range Gaussian σ_r on the Euclidean distance of R, G, B. Border: replicate.
 * @param image R, G, B; not modified
 * @param radiusPx pixels with dx² + dy² ≤ radius² belong to the window
 */
export function bilateralReference(
  image: ReferenceImage,
  radiusPx: number,
  sigmaRange: number,
): ReferenceImage {
  const result = blankImage(image.widthPx, image.heightPx, 3);
  const reach = Math.floor(radiusPx);
  const sigmaSpace = radiusPx / 2;
  for (let y = 0; y < image.heightPx; y++)
    for (let x = 0; x < image.widthPx; x++) {
      const sum = [0, 0, 0];
      let sumOfWeights = 0;
      for (let dy = -reach; dy <= reach; dy++)
        for (let dx = -reach; dx <= reach; dx++) {
          if (dx * dx + dy * dy > radiusPx * radiusPx) continue;
          const colour = [0, 1, 2].map((c) => sampleAt(image, x + dx, y + dy, c));
          const distance = Math.hypot(...colour.map((value, c) => value - sampleAt(image, x, y, c)));
          const weight =
            Math.exp(-(dx * dx + dy * dy) / (2 * sigmaSpace ** 2)) *
            Math.exp(-(distance ** 2) / (2 * sigmaRange ** 2));
          sumOfWeights += weight;
          for (let c = 0; c < 3; c++) sum[c] += weight * colour[c];
        }
      for (let c = 0; c < 3; c++) result.values[(y * image.widthPx + x) * 3 + c] = sum[c] / sumOfWeights;
    }
  return result;
}
