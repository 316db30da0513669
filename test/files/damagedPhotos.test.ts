import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { FileError } from '../../main/files/fileError.ts';
import { readPhoto } from '../../main/files/readPhoto.ts';
import { photographs } from '../fixtures/photographs.ts';
import { temporaryFolder } from './temporaryFolder.ts';

const folder = temporaryFolder();
const small = sharp(photographs.frenchAlpineLandscape).resize(61, 43, { fit: 'fill' });
const files = {
  jpeg: () => small.clone().keepIccProfile().jpeg({ quality: 90 }).toBuffer(),
  progressiveJpeg: () => small.clone().jpeg({ quality: 90, progressive: true }).toBuffer(),
  png: () => small.clone().withIccProfile('p3').png().toBuffer(),
  tiffLzw: () => small.clone().tiff({ compression: 'lzw' }).toBuffer(),
  tiffDeflate16: () => small.clone().toColourspace('rgb16').tiff({ compression: 'deflate' }).toBuffer(),
  webp: () => small.clone().webp({ quality: 90 }).toBuffer(),
  avif: () => small.clone().avif({ effort: 0 }).toBuffer(),
};

/** Reads what may be damaged: a sound picture comes back, or a one-line FileError; anything else is a fault. */
async function outcome(bytes: Uint8Array): Promise<'picture' | 'remark' | 'refused'> {
  const path = await folder.file('damaged', bytes);
  try {
    const photo = await readPhoto(path);
    expect(photo.pixels.length).toBe(photo.widthPx * photo.heightPx * photo.channels);
    return photo.remarks.length > 0 ? 'remark' : 'picture';
  } catch (failure) {
    if (!(failure instanceof FileError)) throw failure;
    expect(failure.message).not.toContain('\n');
    expect(failure.problem.length).toBeGreaterThan(4);
    expect(failure.remedy.length).toBeGreaterThan(10);
    return 'refused';
  }
}

/** A small linear congruential generator: the same flips in every run. */
function numbersFrom(seed: number): (below: number) => number {
  let state = seed;
  return (below) => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return Math.floor((state / 2 ** 32) * below);
  };
}

describe.each(Object.entries(files))('a damaged %s', (_name, make) => {
  it('cut off at 60 places is refused, but for the last few bytes', async () => {
    const whole = await make();
    expect(await outcome(whole)).toBe('picture');
    for (let k = 1; k < 60; k++) {
      const length = Math.floor((whole.length * k) / 60);
      expect([length, await outcome(whole.subarray(0, length))]).toEqual([length, 'refused']);
    }
    for (const missing of [1, 2, 3, 5, 8, 13]) await outcome(whole.subarray(0, whole.length - missing));
  });

  it('with flipped bits never brings the program down', async () => {
    const whole = await make();
    const next = numbersFrom(whole.length);
    for (let k = 0; k < 150; k++) {
      const damaged = Buffer.from(whole);
      const flips = 1 + next(3);
      for (let n = 0; n < flips; n++) damaged[next(damaged.length)] ^= 1 << next(8);
      await outcome(damaged);
    }
  });

  it('with a run of bytes overwritten never brings the program down', async () => {
    const whole = await make();
    const next = numbersFrom(whole.length + 1);
    for (let k = 0; k < 60; k++) {
      const damaged = Buffer.from(whole);
      const at = next(damaged.length);
      damaged.fill(next(2) ? 0xff : 0, at, Math.min(damaged.length, at + 1 + next(200)));
      await outcome(damaged);
    }
  });
});
