import { imageOf, type ReferenceImage, sampleAt } from '../../core/kernels/reference/referenceImage.ts';

/** Numbers 0 ≤ n < 1 that follow from the seed alone (a 32-bit counter through a mixing function). */
export function seededRandom(seed: number): () => number {
  let counter = Math.imul(seed + 1, 0x9e3779b1) | 0;
  return () => {
    counter = (counter + 0x9e3779b9) | 0;
    let z = counter;
    z = Math.imul(z ^ (z >>> 16), 0x21f0aaad);
    z = Math.imul(z ^ (z >>> 15), 0x735a2d97);
    return ((z ^ (z >>> 15)) >>> 0) / 4294967296;
  };
}

/** Normal numbers, mean 0 and standard deviation 1 (Box and Muller 1958). */
export function seededNormal(seed: number): () => number {
  const random = seededRandom(seed);
  return () => Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random());
}

/**
 * A picture to try a kernel on, seeded by its size: soft forms, hard edges and some noise, as numbers that an
 * 8-bit photo can hold.
 */
export function testPicture(widthPx: number, heightPx: number, channels: 1 | 3 = 3): ReferenceImage {
  const random = seededRandom(widthPx * 1000 + heightPx * 10 + channels);
  const phase = [random(), random(), random()].map((value) => value * 6);
  const edge = 0.3 + 0.4 * random();
  return imageOf(widthPx, heightPx, channels, (x, y, c) => {
    const soft = 0.5 + 0.25 * Math.sin(x / 4 + phase[c]) * Math.cos(y / 3 - phase[c]);
    const step = x + 0.5 * y > edge * (widthPx + heightPx / 2) ? 0.25 : 0;
    const value = soft + step + 0.1 * (random() - 0.5);
    return Math.fround(Math.round(Math.min(1, Math.max(0, value)) * 255) / 255);
  });
}

/** A quarter turn clockwise. */
export function quarterTurn(image: ReferenceImage): ReferenceImage {
  return imageOf(image.heightPx, image.widthPx, image.channels, (x, y, c) =>
    sampleAt(image, y, image.heightPx - 1 - x, c),
  );
}

/** Left and right exchanged. */
export function mirror(image: ReferenceImage): ReferenceImage {
  return imageOf(image.widthPx, image.heightPx, image.channels, (x, y, c) =>
    sampleAt(image, image.widthPx - 1 - x, y, c),
  );
}

/** Least and greatest sample of one channel within `reachPx` of a pixel, border replicated. */
export function rangeAround(
  image: ReferenceImage,
  xPx: number,
  yPx: number,
  channel: number,
  reachPx: number,
): { least: number; greatest: number } {
  let least = Number.POSITIVE_INFINITY;
  let greatest = Number.NEGATIVE_INFINITY;
  for (let dy = -reachPx; dy <= reachPx; dy++)
    for (let dx = -reachPx; dx <= reachPx; dx++) {
      const value = sampleAt(image, xPx + dx, yPx + dy, channel);
      least = Math.min(least, value);
      greatest = Math.max(greatest, value);
    }
  return { least, greatest };
}
