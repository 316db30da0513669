// Multi-scale painting, plainly: whole pictures in float64, one step after another, no tiles and no threads.
import {
  grainOfNumbers,
  grainReference,
  quantiseGrain,
} from '../../core/kernels/reference/grain.reference.ts';
import {
  chooseSectorsReference,
  sectorsAtReference,
  type WindowSample,
  windowSamplesReference,
} from '../../core/kernels/reference/grainWise.reference.ts';
import { mergeReference } from '../../core/kernels/reference/merge.reference.ts';
import {
  blankImage,
  imageOf,
  type ReferenceImage,
  sampleAt,
  sampleBetween,
} from '../../core/kernels/reference/referenceImage.ts';
import {
  blockMeansReference,
  gaussianReference,
  type TensorPlanes,
  tensorProductsReference,
} from '../../core/kernels/reference/tensor.reference.ts';

/** The numbers of a painting. */
export interface PyramidPaint {
  brushPx: number;
  pull: number;
  crispness: number;
  noiseFloor: number;
  hold: number;
  coats: number;
}

/** A coat joins what lies close together; the closing coat parts it again: shares of the level's noise floor. */
const coatFloor = 1.5;
const closingFloor = 0.5;
const mergeSigmaRange = 0.05;
/** Share of the coarser level's tensor. */
const coarseShare = 0.25;
/** Pixels by which the border is repeated before derivatives: more than derivative and Gaussian reach. */
const marginPx = 8;

interface Level {
  paint: ReferenceImage;
  /** One tensor a block of 2 × 2 pixels. */
  tensor: TensorPlanes;
}

/** L = max(1, floor(log2(B/6)) + 1). */
export function pyramidLevels(brushPx: number): number {
  return Math.max(1, Math.floor(Math.log2(brushPx / 6)) + 1);
}

/**
 * Paints a picture from coarse to fine. Every level takes its grain from its own source and a quarter of the
 * coarser level's; is painted; joined with the coarser paint; painted once more with the same grain. Coarser
 * levels are gone over in further coats, with the grain of the paint.
 * @param photo R, G, B in 0…1; each edge must be long enough for all levels
 */
export function paintPyramid(photo: ReferenceImage, paint: PyramidPaint): ReferenceImage {
  const count = pyramidLevels(paint.brushPx);
  const radiusPx = paint.brushPx / 2 ** count;
  const sources = [photo];
  while (sources.length < count) sources.push(halved(sources[sources.length - 1]));
  const smooth = smootherOf(radiusPx, paint);
  let coarser: Level | null = null;
  for (let depth = count - 1; depth >= 0; depth--) {
    const floor = paint.noiseFloor / 2 ** depth;
    let tensor = tensorOf(sources[depth], coarser);
    let painted = smooth(sources[depth], tensor, floor);
    if (coarser) {
      const rule = { sigmaRange: mergeSigmaRange, hold: paint.hold };
      painted = smooth(mergeReference(painted, coarser.paint, rule), tensor, floor * closingFloor);
    }
    for (let coat = 0; depth > 0 && coat < paint.coats; coat++) {
      tensor = tensorOf(painted, coarser);
      painted = smooth(painted, tensor, floor * coatFloor);
    }
    coarser = { paint: painted, tensor };
  }
  return coarser!.paint;
}

/** Means of 2 × 2 pixels, sizes rounded up, the border repeated. */
function halved(image: ReferenceImage): ReferenceImage {
  return blockMeansReference(image);
}

/** The tensor of every block, smoothed over blocks; a quarter of the coarser one's, brought up, is added. */
function tensorOf(image: ReferenceImage, coarser: Level | null): TensorPlanes {
  const blocksX = Math.ceil(image.widthPx / 2);
  const blocksY = Math.ceil(image.heightPx / 2);
  const widened = imageOf(2 * (blocksX + marginPx), 2 * (blocksY + marginPx), 3, (x, y, c) =>
    sampleAt(image, x - marginPx, y - marginPx, c),
  );
  const products = tensorProductsReference(widened);
  const blocksOf = (name: keyof TensorPlanes) => {
    const smoothed = gaussianReference(blockMeansReference(products[name]), 1, 3);
    return imageOf(blocksX, blocksY, 1, (x, y) => {
      const own = sampleAt(smoothed, x + marginPx / 2, y + marginPx / 2);
      if (!coarser) return own;
      return (
        own + coarseShare * sampleBetween(coarser.tensor[name], (x + 0.5) / 2 - 0.5, (y + 0.5) / 2 - 0.5)
      );
    });
  };
  return { e: blocksOf('e'), f: blocksOf('f'), g: blocksOf('g') };
}

/** Grain-wise smoothing with one kernel of the bank for each block; the windows are kept. */
function smootherOf(radiusPx: number, { pull, crispness }: PyramidPaint) {
  const windows = new Map<number, WindowSample[]>();
  const windowOf = (tensor: TensorPlanes, blockX: number, blockY: number) => {
    const [e, f, g] = [tensor.e, tensor.f, tensor.g].map((plane) => sampleAt(plane, blockX, blockY));
    const { orientation, anisotropy } = quantiseGrain(grainReference(e, f, g));
    const number = orientation * 16 + anisotropy;
    if (!windows.has(number)) {
      const grain = grainOfNumbers(orientation, anisotropy);
      windows.set(number, windowSamplesReference(radiusPx, pull, grain.tangentRad, grain.anisotropy));
    }
    return windows.get(number)!;
  };
  return (image: ReferenceImage, tensor: TensorPlanes, noiseFloor: number): ReferenceImage => {
    const result = blankImage(image.widthPx, image.heightPx, 3);
    for (let y = 0; y < image.heightPx; y++)
      for (let x = 0; x < image.widthPx; x++) {
        const sectors = sectorsAtReference(image, x, y, windowOf(tensor, x >> 1, y >> 1));
        const colour = chooseSectorsReference(sectors, noiseFloor, crispness);
        result.values.set(colour, (y * image.widthPx + x) * 3);
      }
    return result;
  };
}
