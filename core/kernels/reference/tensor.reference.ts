import { imageOf, type ReferenceImage, sampleAt } from './referenceImage.ts';

/** Structure tensor: J = [[e, f], [f, g]] at every pixel. */
export interface TensorPlanes {
  e: ReferenceImage;
  f: ReferenceImage;
  g: ReferenceImage;
}

/** Side weight of the derivative kernel: B. Jähne, H. Scharr, S. Körkel 1999. */
const p = 0.183;
const across = [p, 1 - 2 * p, p];

/**
 * Derivatives ½[−p, −(1−2p), −p | p, (1−2p), p] of every channel. Border: replicate.
 * @param image any number of channels; not modified
 * @returns change per pixel to the right and downwards
 */
export function derivativesReference(image: ReferenceImage): { dx: ReferenceImage; dy: ReferenceImage } {
  const { widthPx, heightPx, channels } = image;
  const derivative = (alongX: boolean) =>
    imageOf(widthPx, heightPx, channels, (x, y, c) => {
      let sum = 0;
      for (let i = -1; i <= 1; i++) {
        const [plus, minus] = alongX
          ? [sampleAt(image, x + 1, y + i, c), sampleAt(image, x - 1, y + i, c)]
          : [sampleAt(image, x + i, y + 1, c), sampleAt(image, x + i, y - 1, c)];
        sum += 0.5 * across[i + 1] * (plus - minus);
      }
      return sum;
    });
  return { dx: derivative(true), dy: derivative(false) };
}

/** E = Σ_c gx², F = Σ_c gx·gy, G = Σ_c gy² over the channels (Di Zenzo 1986), not yet smoothed. */
export function tensorProductsReference(image: ReferenceImage): TensorPlanes {
  const { dx, dy } = derivativesReference(image);
  const productOf = (a: ReferenceImage, b: ReferenceImage) =>
    imageOf(image.widthPx, image.heightPx, 1, (x, y) => {
      let sum = 0;
      for (let c = 0; c < image.channels; c++) sum += sampleAt(a, x, y, c) * sampleAt(b, x, y, c);
      return sum;
    });
  return { e: productOf(dx, dx), f: productOf(dx, dy), g: productOf(dy, dy) };
}

/**
 * Means of 2 × 2 pixels of a plane: one value a block. Where a block reaches beyond the plane the border is
 * replicated.
 */
export function blockMeansReference(plane: ReferenceImage): ReferenceImage {
  return imageOf(Math.ceil(plane.widthPx / 2), Math.ceil(plane.heightPx / 2), plane.channels, (x, y, c) => {
    const at = (dx: number, dy: number) => sampleAt(plane, 2 * x + dx, 2 * y + dy, c);
    return (at(0, 0) + at(1, 0) + at(0, 1) + at(1, 1)) / 4;
  });
}

/** Sampled Gaussian −radius … +radius, normalised to sum 1. */
export function gaussianWeightsReference(sigmaPx: number, radiusPx: number): number[] {
  const raw = Array.from({ length: 2 * radiusPx + 1 }, (_, i) =>
    Math.exp(-((i - radiusPx) ** 2) / (2 * sigmaPx ** 2)),
  );
  const sum = raw.reduce((total, weight) => total + weight, 0);
  return raw.map((weight) => weight / sum);
}

/**
 * Gaussian smoothing, as one two-dimensional sum. Border: replicate.
 * @param radiusPx where the Gaussian is cut off; 3σ rounded up unless given
 */
export function gaussianReference(
  image: ReferenceImage,
  sigmaPx: number,
  radiusPx = Math.ceil(3 * sigmaPx),
): ReferenceImage {
  const weights = gaussianWeightsReference(sigmaPx, radiusPx);
  return imageOf(image.widthPx, image.heightPx, image.channels, (x, y, c) => {
    let sum = 0;
    for (let dy = -radiusPx; dy <= radiusPx; dy++)
      for (let dx = -radiusPx; dx <= radiusPx; dx++)
        sum += weights[dy + radiusPx] * weights[dx + radiusPx] * sampleAt(image, x + dx, y + dy, c);
    return sum;
  });
}

/**
 * The smoothed structure tensor. Border: the picture is replicated for the derivatives, their products for the
 * smoothing.
 * @param sigmaPx 2 in the definition of the grain
 */
export function structureTensorReference(
  image: ReferenceImage,
  sigmaPx: number,
  radiusPx?: number,
): TensorPlanes {
  const { e, f, g } = tensorProductsReference(image);
  return {
    e: gaussianReference(e, sigmaPx, radiusPx),
    f: gaussianReference(f, sigmaPx, radiusPx),
    g: gaussianReference(g, sigmaPx, radiusPx),
  };
}
