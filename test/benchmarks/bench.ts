// npm run bench: megapixels per second by method, stage and number of workers, and the ratio to the plain
// references on the same picture in the same run. Quote ratios: absolute times depend on the machine's other work.
import { availableParallelism } from 'node:os';
import sharp from 'sharp';
import { bilateralReference } from '../../core/kernels/reference/bilateral.reference.ts';
import { grainReference } from '../../core/kernels/reference/grain.reference.ts';
import { grainWiseReference } from '../../core/kernels/reference/grainWise.reference.ts';
import { quadrantReference } from '../../core/kernels/reference/quadrant.reference.ts';
import { imageOf, type ReferenceImage } from '../../core/kernels/reference/referenceImage.ts';
import { structureTensorReference } from '../../core/kernels/reference/tensor.reference.ts';
import { defaultParameters, type Parameters } from '../../core/parameters/table.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import { createEngine } from '../../main/engine/paintEngine.ts';
import { photographs } from '../fixtures/photographs.ts';

/** The photograph is enlarged to this, so that start-up costs do not count. */
const widthPx = 3072;
/** The references are slow: they paint a piece of this size. */
const pieceSidePx = 192;
const runs = 3;

async function enlarged(path: string): Promise<DecodedPhoto> {
  const { data, info } = await sharp(path)
    .resize(widthPx)
    .removeAlpha()
    .raw()
    .toBuffer({ resolveWithObject: true });
  return { widthPx: info.width, heightPx: info.height, channels: 3, pixels: data };
}

function pieceOf(photo: DecodedPhoto, sidePx: number): ReferenceImage {
  const left = (photo.widthPx - sidePx) >> 1;
  const top = (photo.heightPx - sidePx) >> 1;
  return imageOf(
    sidePx,
    sidePx,
    3,
    (x, y, c) => photo.pixels[((top + y) * photo.widthPx + left + x) * 3 + c] / 255,
  );
}

function megapixelsPerSecond(pixels: number, ms: number): number {
  return pixels / 1000 / ms;
}

/** Megapixels per second of each plain version on the piece. */
function timeReferences(piece: ReferenceImage): Record<string, number> {
  const pixels = piece.widthPx * piece.heightPx;
  const time = (paint: () => unknown) => {
    const startMs = performance.now();
    paint();
    return megapixelsPerSecond(pixels, performance.now() - startMs);
  };
  return {
    'grain-wise': time(() => {
      const { e, f, g } = structureTensorReference(piece, 2);
      const at = (x: number, y: number) => y * piece.widthPx + x;
      const grainAt = (x: number, y: number) =>
        grainReference(e.values[at(x, y)], f.values[at(x, y)], g.values[at(x, y)]);
      grainWiseReference(piece, grainAt, { radiusPx: 6, pull: 1, noiseFloor: 0.01, crispness: 8 });
    }),
    quadrant: time(() => quadrantReference(piece, 6)),
    bilateral: time(() => bilateralReference(piece, 6, 0.1)),
  };
}

const brush12: Partial<Parameters> = { 'body.brush': '12px', 'body.noiseFloor': 0.01, 'line.strength': 0 };
const cases: { name: string; parameters: Partial<Parameters> }[] = [
  { name: 'quadrant 12 px', parameters: { ...brush12, 'body.method': 'quadrant' } },
  { name: 'bilateral 12 px', parameters: { ...brush12, 'body.method': 'bilateral' } },
  { name: 'sectors 12 px', parameters: { ...brush12, 'body.method': 'sectors' } },
  { name: 'grain-wise 12 px', parameters: { ...brush12, 'body.method': 'grain-wise' } },
  { name: 'multi-scale 12 px', parameters: brush12 },
  { name: 'multi-scale 64 px', parameters: { ...brush12, 'body.brush': '64px' } },
  { name: 'multi-scale 96 px', parameters: { ...brush12, 'body.brush': '96px' } },
  { name: 'with the ink line', parameters: { 'body.brush': '64px', 'body.noiseFloor': 0.01 } },
];

const photo = await enlarged(photographs.nagasakiBoats);
const pixels = photo.widthPx * photo.heightPx;
process.stdout.write(`${photo.widthPx} × ${photo.heightPx} px; megapixels per second, best of ${runs}\n`);
const references = timeReferences(pieceOf(photo, pieceSidePx));
for (const workers of new Set([1, availableParallelism()])) {
  const engine = await createEngine({ workers });
  const held = await engine.open(photo);
  process.stdout.write(
    `\n${workers} worker${workers === 1 ? '' : 's'}            grain    body    line compose   whole\n`,
  );
  for (const { name, parameters } of cases) {
    let best = { grainMs: Infinity, bodyMs: Infinity, lineMs: Infinity, composeMs: Infinity };
    let bestMs = Infinity;
    for (let run = 0; run < runs; run++) {
      // A slightly different hold forgets the coarse levels kept from the run before.
      const fresh = { ...defaultParameters(), ...parameters, 'body.hold': 0.25 + run / 1000 };
      const { times, release } = await engine.paintPicture(held, fresh);
      release();
      const totalMs = times.grainMs + times.bodyMs + times.lineMs + times.composeMs;
      if (totalMs < bestMs) [best, bestMs] = [times, totalMs];
    }
    const columns = [best.grainMs, best.bodyMs, best.lineMs, best.composeMs, bestMs]
      .map((ms) => (ms < 0.5 ? '–' : megapixelsPerSecond(pixels, ms).toFixed(1)).padStart(8))
      .join('');
    const plain = references[name.split(' ')[0]];
    const ratio = plain
      ? `   ${Math.round(megapixelsPerSecond(pixels, bestMs) / plain)} × the plain version`
      : '';
    process.stdout.write(`${name.padEnd(18)}${columns}${ratio}\n`);
  }
  held.close();
  await engine.close();
}
