import { imageOf, type ReferenceImage, sampleBetween } from './referenceImage.ts';

/** A difference of Gaussians: S = (1 + p)·G_σ − p·G_kσ. */
export interface DogShape {
  sigmaPx: number;
  /** How much of the wider Gaussian is taken away. */
  p: number;
  /** Ratio of the two standard deviations, 1.6 unless given. */
  k?: number;
  /** Samples −radius … +radius, one pixel apart; ⌈2·k·σ⌉ unless given. */
  radiusPx?: number;
}

/** The two Gaussians' weights at −radius … +radius, each normalised to sum 1, and combined. */
export function dogWeightsReference(shape: DogShape): number[] {
  const k = shape.k ?? 1.6;
  const radius = shape.radiusPx ?? Math.ceil(2 * k * shape.sigmaPx);
  const gaussian = (sigma: number) => {
    const raw = Array.from({ length: 2 * radius + 1 }, (_, i) =>
      Math.exp(-((i - radius) ** 2) / (2 * sigma * sigma)),
    );
    const sum = raw.reduce((total, weight) => total + weight, 0);
    return raw.map((weight) => weight / sum);
  };
  const narrow = gaussian(shape.sigmaPx);
  const wide = gaussian(k * shape.sigmaPx);
  return narrow.map((weight, i) => (1 + shape.p) * weight - shape.p * wide[i]);
}

/**
 * Difference of Gaussians across the grain (Kyprianidis and Döllner 2008, XDoG form of Winnemöller, Kyprianidis
 * and Olsen 2012): samples on a straight line at right angles to the tangent, bilinear, one pixel apart.
 * Border: replicate.
 * @param luma one channel; not modified
 * @param tangentRadAt angle of the grain at a pixel
 */
export function dogAcrossReference(
  luma: ReferenceImage,
  tangentRadAt: (xPx: number, yPx: number) => number,
  shape: DogShape,
): ReferenceImage {
  const weights = dogWeightsReference(shape);
  const radius = (weights.length - 1) / 2;
  return imageOf(luma.widthPx, luma.heightPx, 1, (x, y) => {
    const tangentRad = tangentRadAt(x, y);
    const acrossX = -Math.sin(tangentRad);
    const acrossY = Math.cos(tangentRad);
    return weights.reduce(
      (sum, weight, i) =>
        sum + weight * sampleBetween(luma, x + (i - radius) * acrossX, y + (i - radius) * acrossY),
      0,
    );
  });
}

/**
 * Soft threshold of XDoG: 1 where S ≥ ε, else 1 + tanh(φ(S − ε)). 1 is bare paint, 0 full ink.
 * @param phi steepness
 */
export function xdogThresholdReference(s: number, epsilon: number, phi: number): number {
  return s >= epsilon ? 1 : 1 + Math.tanh(phi * (s - epsilon));
}
