import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { focusOf } from '../../core/series/focus.ts';
import { photographs } from '../fixtures/photographs.ts';

async function lumaOf(path: string, blurPx: number, gain = 1) {
  const image = sharp(path).greyscale().resize({ width: 800 });
  const { data, info } = await (blurPx > 0 ? image.blur(blurPx) : image)
    .raw()
    .toBuffer({ resolveWithObject: true });
  const luma = Float64Array.from(
    { length: info.width * info.height },
    (_, i) => data[i * info.channels] * gain,
  );
  return { luma, widthPx: info.width, heightPx: info.height };
}

const focusAt = async (path: string, blurPx: number, gain = 1) => {
  const { luma, widthPx, heightPx } = await lumaOf(path, blurPx, gain);
  return focusOf(luma, widthPx, heightPx);
};

// The flower is left out: at this scale it has no crisp edge to begin with.
const { alliumOreophilum: _, ...crisp } = photographs;

describe('focus', () => {
  it.each(Object.entries(crisp))('of %s falls the more it is blurred', async (_name, path) => {
    const values = [
      await focusAt(path, 0),
      await focusAt(path, 2),
      await focusAt(path, 4),
      await focusAt(path, 8),
    ];
    expect(values[1]).toBeLessThan(values[0]);
    expect(values[2]).toBeLessThan(values[1]);
    expect(values[3]).toBeLessThanOrEqual(values[2]);
    expect(values[2]).toBeLessThan(0.65 * values[0]);
  });

  it('hardly minds how much contrast there is', async () => {
    const path = photographs.nagasakiBoats;
    expect(await focusAt(path, 0, 0.5)).toBeCloseTo(await focusAt(path, 0), 1);
  });

  it('is 0 where there is no edge', () => {
    expect(focusOf(new Float64Array(64 * 64).fill(90), 64, 64)).toBe(0);
  });
});
