import { grainOfNumbers } from './grain.reference.ts';
import { blankImage, type ReferenceImage, sampleAt } from './referenceImage.ts';
import { sectorCount, sectorWeightsReference } from './sectorWeights.reference.ts';

/** How grain-wise smoothing paints. */
export interface GrainWiseBrush {
  /** Radius of the window where there is no grain. */
  radiusPx: number;
  /** Grain-wise pull, 1/α: 0 keeps the window round, at 1 a clean edge has it 2r long and r/2 wide. */
  pull: number;
  /** τ_w: spreads below it count as this much. */
  noiseFloor: number;
  /** q: how hard the calmest sectors win. */
  crispness: number;
}

/** Half axes of the window: a = r(α+A)/α along the grain, b = rα/(α+A) across it, α = 1/pull. */
export function ellipseAxes(
  radiusPx: number,
  pull: number,
  anisotropy: number,
): { aPx: number; bPx: number } {
  const stretch = 1 + pull * anisotropy;
  return { aPx: radiusPx * stretch, bPx: radiusPx / stretch };
}

/** A pixel of the window: its place and its eight weights. */
export interface WindowSample {
  dx: number;
  dy: number;
  weights: number[];
}

/**
 * Pixels p with |v| ≤ 1, v = diag(1/a, 1/b)·R(−φ)·p, with the weights of the eight sectors, row by row.
 * Points that lie on the rim to within 1e-9 belong to the window.
 */
export function windowSamplesReference(
  radiusPx: number,
  pull: number,
  tangentRad: number,
  anisotropy: number,
): WindowSample[] {
  const { aPx, bPx } = ellipseAxes(radiusPx, pull, anisotropy);
  const reach = Math.ceil(Math.max(aPx, bPx));
  const cos = Math.cos(tangentRad);
  const sin = Math.sin(tangentRad);
  const samples: WindowSample[] = [];
  for (let dy = -reach; dy <= reach; dy++)
    for (let dx = -reach; dx <= reach; dx++) {
      const vx = (cos * dx + sin * dy) / aPx;
      const vy = (-sin * dx + cos * dy) / bPx;
      if (vx * vx + vy * vy <= 1 + 1e-9) samples.push({ dx, dy, weights: sectorWeightsReference(vx, vy) });
    }
  return samples;
}

/** Mean colour and spread s_k = √(E_k|c|² − |m_k|²) of one sector around one pixel. */
export interface Sector {
  mean: number[];
  spread: number;
}

/** The eight sectors around one pixel. Border: replicate. */
export function sectorsAtReference(
  image: ReferenceImage,
  xPx: number,
  yPx: number,
  samples: WindowSample[],
): Sector[] {
  return Array.from({ length: sectorCount }, (_, k) => {
    const mean = [0, 0, 0];
    let square = 0;
    let sumOfWeights = 0;
    for (const { dx, dy, weights } of samples) {
      const weight = weights[k];
      sumOfWeights += weight;
      for (let c = 0; c < 3; c++) {
        const value = sampleAt(image, xPx + dx, yPx + dy, c);
        mean[c] += weight * value;
        square += weight * value * value;
      }
    }
    for (let c = 0; c < 3; c++) mean[c] /= sumOfWeights;
    const variance = square / sumOfWeights - mean.reduce((sum, value) => sum + value * value, 0);
    return { mean, spread: Math.sqrt(Math.max(0, variance)) };
  });
}

/** Σ ω_k m_k / Σ ω_k with ω_k = max(τ_w, s_k)^−q. */
export function chooseSectorsReference(sectors: Sector[], noiseFloor: number, crispness: number): number[] {
  const sum = [0, 0, 0];
  let sumOfWeights = 0;
  for (const { mean, spread } of sectors) {
    const weight = Math.max(noiseFloor, spread) ** -crispness;
    sumOfWeights += weight;
    for (let c = 0; c < 3; c++) sum[c] += weight * mean[c];
  }
  return sum.map((value) => value / sumOfWeights);
}

/**
 * Grain-wise smoothing (Kyprianidis, Kang, Döllner 2009, polynomial weights of 2010), every weight evaluated
 * where it is used. Border: replicate.
 * @param image R, G, B; not modified
 * @param grainAt tangent angle and anisotropy of a pixel
 */
export function grainWiseReference(
  image: ReferenceImage,
  grainAt: (xPx: number, yPx: number) => { tangentRad: number; anisotropy: number },
  brush: GrainWiseBrush,
): ReferenceImage {
  const result = blankImage(image.widthPx, image.heightPx, 3);
  for (let y = 0; y < image.heightPx; y++)
    for (let x = 0; x < image.widthPx; x++) {
      const { tangentRad, anisotropy } = grainAt(x, y);
      const samples = windowSamplesReference(brush.radiusPx, brush.pull, tangentRad, anisotropy);
      const sectors = sectorsAtReference(image, x, y, samples);
      const colour = chooseSectorsReference(sectors, brush.noiseFloor, brush.crispness);
      result.values.set(colour, (y * image.widthPx + x) * 3);
    }
  return result;
}

/**
 * The same for grain given as numbers of the kernel bank, as the paint is defined: φ = o·π/64, A = i/15.
 * @param numbersAt orientation 0…63 and anisotropy 0…15 of a pixel
 */
export function grainWiseBankReference(
  image: ReferenceImage,
  numbersAt: (xPx: number, yPx: number) => { orientation: number; anisotropy: number },
  brush: GrainWiseBrush,
): ReferenceImage {
  return grainWiseReference(
    image,
    (x, y) => {
      const { orientation, anisotropy } = numbersAt(x, y);
      return grainOfNumbers(orientation, anisotropy);
    },
    brush,
  );
}
