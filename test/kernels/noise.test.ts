import { describe, expect, it } from 'vitest';
import { noiseMeanReference, noiseMedianReference } from '../../core/kernels/reference/noise.reference.ts';
import { blankImage, type ReferenceImage } from '../../core/kernels/reference/referenceImage.ts';
import {
  type NoiseRecord,
  noiseRecordBytes,
  noiseSigma,
  noiseSigmaOfMean,
  readNoiseRecord,
  sumNoiseRecords,
} from '../../core/noise/noiseFloor.ts';
import { seededNormal, testPicture } from './testPictures.ts';
import { sizeMatrix, WasmTiles } from './wasmTiles.ts';

const tiles = new WasmTiles();

interface Samples {
  widthPx: number;
  heightPx: number;
  channels: 3 | 4;
  pixels: Uint8Array | Uint16Array;
}

/** A picture's R, G, B as a photo holds them; a fourth channel is filled with what must not be looked at. */
function samplesOf(image: ReferenceImage, channels: 3 | 4, bytesPerSample: 1 | 2): Samples {
  const { widthPx, heightPx } = image;
  const steps = bytesPerSample === 1 ? 255 : 65535;
  const pixels = new (bytesPerSample === 1 ? Uint8Array : Uint16Array)(widthPx * heightPx * channels);
  for (let i = 0; i < widthPx * heightPx; i++)
    for (let c = 0; c < channels; c++)
      pixels[i * channels + c] =
        c === 3 ? (i * 7919) % steps : Math.round(Math.min(1, Math.max(0, image.values[i * 3 + c])) * steps);
  return { widthPx, heightPx, channels, pixels };
}

function count(
  photo: Samples,
  bands: [fromRow: number, toRow: number][] = [[0, photo.heightPx]],
): NoiseRecord {
  tiles.reset();
  const { pixels, widthPx, heightPx, channels } = photo;
  const pointer = tiles.allocate(pixels.byteLength);
  tiles.bytes(pointer, pixels.byteLength).set(new Uint8Array(pixels.buffer));
  const record = tiles.allocate(noiseRecordBytes);
  tiles.bytes(record, noiseRecordBytes).fill(0);
  const guard = tiles.allocate(64);
  for (const [fromRow, toRow] of bands)
    tiles.kernels.noiseHistogram(
      pointer,
      widthPx,
      heightPx,
      channels,
      pixels.BYTES_PER_ELEMENT,
      fromRow,
      toRow,
      record,
    );
  expect(tiles.bytes(guard, 64).every((byte) => byte === 0xff)).toBe(true);
  return readNoiseRecord(tiles.memory.buffer, record);
}

/** Grey noise around mid-grey; `spread01` is its σ in encoded units. */
function greyNoise(spread01: number, seed: number, widthPx = 1000, heightPx = 700): ReferenceImage {
  const normal = seededNormal(seed);
  const image = blankImage(widthPx, heightPx, 3);
  for (let i = 0; i < widthPx * heightPx; i++) image.values.fill(0.5 + spread01 * normal(), i * 3, i * 3 + 3);
  return image;
}

describe('noise of a photo', () => {
  it('reserves the bytes that the module says', () => {
    expect(tiles.kernels.noiseRecordBytes()).toBe(noiseRecordBytes);
  });

  it('agrees with the plain version, both forms, at every size, depth and number of channels', () => {
    for (const [widthPx, heightPx] of sizeMatrix)
      for (const channels of [3, 4] as const)
        for (const bytes of [1, 2] as const) {
          const image = testPicture(widthPx, heightPx);
          const record = count(samplesOf(image, channels, bytes));
          const name = `${widthPx} × ${heightPx}, ${channels} channels of ${bytes}`;
          expect(record.count, name).toBe(BigInt(Math.max(0, widthPx - 2) * Math.max(0, heightPx - 2)));
          if (record.count === 0n) {
            expect(noiseSigma(record, bytes)).toBe(0);
            expect(noiseSigmaOfMean(record, bytes)).toBe(0);
            continue;
          }
          expect(noiseSigmaOfMean(record, bytes), name).toBeCloseTo(noiseMeanReference(image), 7);
        }
  });

  it('agrees with the plain median where there are enough pixels for one', () => {
    for (const bytes of [1, 2] as const) {
      const image = testPicture(400, 300);
      const sigma = noiseSigma(count(samplesOf(image, 3, bytes)), bytes);
      expect(sigma / noiseMedianReference(image)).toBeCloseTo(1, 2);
    }
  });

  it('adds up to the same record from bands in any order, and from several records', () => {
    const photo = samplesOf(testPicture(57, 41), 4, 2);
    const whole = count(photo);
    const bands: [number, number][] = [
      [30, 41],
      [0, 1],
      [13, 30],
      [1, 13],
    ];
    expect(count(photo, bands)).toEqual(whole);
    expect(sumNoiseRecords(bands.map((band) => count(photo, [band])))).toEqual(whole);
  });

  it('finds none in flat pictures and on slopes, whatever their level', () => {
    for (const bytes of [1, 2] as const)
      for (const level of [0, 0.3, 1]) {
        const flat = blankImage(60, 40, 3, level);
        expect(noiseSigma(count(samplesOf(flat, 3, bytes)), bytes)).toBe(0);
        expect(noiseSigmaOfMean(count(samplesOf(flat, 3, bytes)), bytes)).toBe(0);
      }
    const slope = blankImage(60, 40, 3);
    for (let i = 0; i < 60 * 40; i++)
      slope.values.fill((2 * (i % 60) + 3 * Math.floor(i / 60)) / 255, i * 3, i * 3 + 3);
    expect(noiseSigma(count(samplesOf(slope, 3, 1)), 1)).toBe(0);
  });

  it('holds the largest |I∗N| there can be', () => {
    // White where N is positive, black where it is negative: 8 · 65535 · 4096, just below 2^31.
    for (const [bytes, steps, bin] of [
      [1, 255, 8 * 255 * 16],
      [2, 65535, 32768],
    ] as const) {
      const image = blankImage(3, 3, 3);
      for (const i of [0, 2, 4, 6, 8]) image.values.fill(1, i * 3, i * 3 + 3);
      const record = count(samplesOf(image, 3, bytes));
      expect(record.sum).toBe(BigInt(8 * steps * 4096));
      expect(record.bins[bin]).toBe(1);
    }
  });
});

// Immerkær, CVIU 64(2), 1996: simulated noise of known deviation is recovered within 0.5 %.
describe('noise of a photo, simulated', () => {
  it.each([1, 5, 20])('recovers σ = %d/255 from 16 bits within 0.5 %%', (sigma255) => {
    const record = count(samplesOf(greyNoise(sigma255 / 255, sigma255), 3, 2));
    expect(Math.abs((noiseSigma(record, 2) * 255) / sigma255 - 1)).toBeLessThan(0.005);
    expect(Math.abs((noiseSigmaOfMean(record, 2) * 255) / sigma255 - 1)).toBeLessThan(0.005);
  });

  it.each([0.3, 0.1])('recovers σ = %d/255 from 16 bits within 1 %%', (sigma255) => {
    const record = count(samplesOf(greyNoise(sigma255 / 255, 7), 4, 2));
    expect(Math.abs((noiseSigma(record, 2) * 255) / sigma255 - 1)).toBeLessThan(0.01);
  });

  it.each([
    [1, 0.01],
    [5, 0.005],
    [20, 0.005],
    [0.3, 0.15],
  ])('recovers σ = %d/255 from 8 bits, rounding counted as noise', (sigma255, tolerance) => {
    const photo = samplesOf(greyNoise(sigma255 / 255, 3), 3, 1);
    const sigma = noiseSigma(count(photo), 1) * 255;
    // What the rounded pixels really deviate by; about √(σ² + 1/12) of a step from σ = 0.5 on.
    expect(Math.abs(sigma / deviationOfReds(photo) - 1)).toBeLessThan(tolerance);
  });

  it('sees the luma of noise that is independent in R, G and B', () => {
    const normal = seededNormal(21);
    const image = blankImage(1000, 700, 3);
    for (let i = 0; i < image.values.length; i++) image.values[i] = 0.5 + (4 / 255) * normal();
    const luma = 4 * Math.hypot(0.2126, 0.7152, 0.0722);
    expect((noiseSigma(count(samplesOf(image, 3, 2)), 2) * 255) / luma).toBeCloseTo(1, 2);
  });

  it('is hardly moved by edges, where the mean form is', () => {
    const image = greyNoise(2 / 255, 5);
    for (let y = 0; y < 700; y++)
      for (let x = 0; x < 1000; x++)
        if (Math.floor(x / 80 + y / 120) % 2 === 0)
          for (let c = 0; c < 3; c++) image.values[(y * 1000 + x) * 3 + c] += 0.3;
    const record = count(samplesOf(image, 3, 2));
    expect(noiseSigma(record, 2) * 255).toBeLessThan(2 * 1.1);
    expect(noiseSigmaOfMean(record, 2) * 255).toBeGreaterThan(2 * 1.3);
  });
});

function deviationOfReds(photo: Samples): number {
  const reds = Float64Array.from(
    { length: photo.widthPx * photo.heightPx },
    (_, i) => photo.pixels[i * photo.channels],
  );
  const mean = reds.reduce((sum, red) => sum + red, 0) / reds.length;
  return Math.sqrt(reds.reduce((sum, red) => sum + (red - mean) ** 2, 0) / reds.length);
}
