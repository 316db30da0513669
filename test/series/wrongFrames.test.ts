import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { defaultParameters } from '../../core/parameters/table.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import type { FrameFigures } from '../../core/series/frameFigures.ts';
import { type OddOneOut, oddOnesOut } from '../../core/series/oddOnesOut.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { matchPhoto, measureLead } from '../../main/series/matchPhoto.ts';
import { photographs } from '../fixtures/photographs.ts';
import { seededRandom } from '../kernels/testPictures.ts';
import { type Variation, variedFrame } from './variedSeries.ts';

const frameCount = 20;
const wrongLight = 6;
const blurred = 13;
const printLongEdgeMm = 60;

/** Frames of one place: exposure, cast, noise and size differ a little, as from hand to hand. */
function variationOf(index: number): Variation {
  const random = seededRandom(index + 50);
  const around = (reach: number) => reach * (2 * random() - 1);
  return {
    longEdgePx: Math.round(700 + around(100)),
    exposureEv: around(0.4),
    castK: around(250),
    noise255: 3 * random(),
  };
}

async function frameAt(index: number, path: string): Promise<DecodedPhoto> {
  const usual = variationOf(index);
  if (index === wrongLight) return variedFrame(path, { ...usual, exposureEv: -1.2, castK: -3500 }, index);
  const frame = await variedFrame(path, usual, index);
  if (index !== blurred) return frame;
  const { widthPx: width, heightPx: height, channels } = frame;
  const pixels = await sharp(frame.pixels as Uint8Array, { raw: { width, height, channels } })
    .blur(6)
    .raw()
    .toBuffer();
  return { ...frame, pixels: new Uint8Array(pixels) };
}

let engine: Engine;
beforeAll(async () => {
  engine = await createEngine();
});
afterAll(() => engine.close());

async function figuresOf(path: string): Promise<FrameFigures[]> {
  const parameters = defaultParameters();
  const photo = await frameAt(0, path);
  const held = await engine.open(photo);
  const lead = await measureLead(engine, photo, held, parameters, { printLongEdgeMm });
  held.close();
  const figures = [lead.figures];
  for (let index = 1; index < frameCount; index++) {
    const options = { amount01: 1, printLongEdgeMm };
    const frame = await matchPhoto(engine, await frameAt(index, path), lead, parameters, options);
    figures.push(frame.before);
  }
  return figures;
}

describe.each(['nagasakiBoats', 'frenchAlpineLandscape'] as const)('twenty frames of %s', (name) => {
  let odd: (OddOneOut | null)[];
  beforeAll(async () => {
    odd = oddOnesOut(await figuresOf(photographs[name]), 0);
  }, 120_000);

  it('show the one in a wrong light', () => {
    expect(odd[wrongLight]).toMatchObject({ remedies: ['matchTone', 'leaveOut'] });
  });

  it('show the one out of focus', () => {
    expect(odd[blurred]?.reason).toMatch(/focus/);
  });

  it('show at most one good frame besides', () => {
    const good = odd.filter((one, index) => one && index !== wrongLight && index !== blurred);
    expect(good.length).toBeLessThanOrEqual(1);
  });
});
