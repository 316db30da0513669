import { basename, dirname, extname, join } from 'node:path';
import { fewestPpi } from '../../core/proof/layProof.ts';
import { hairlineColour, markColour, type ProofPage, pointsPerInch } from '../../core/proof/proofPage.ts';
import { sharp } from '../files/imageLibrary.ts';
import { unlessAborted } from '../files/interruption.ts';
import { writePicture } from '../files/writePicture.ts';
import type { PrintPictures } from './printPictures.ts';
import type { ProofType } from './proofType.ts';

/** Pictures are placed so that none has fewer pixels an inch: at this resolution none has to be enlarged. */
const pagePpi = fewestPpi;
const hairlinePt = 0.4;

/**
 * Writes each page as a PNG; the type is drawn as outlines, so no font is asked of the machine.
 * @param out the name of a single page; of several, each gets its number: `ferry-1.png`, `ferry-2.png`
 * @returns the files that were written
 * @throws FileError where one cannot be written; the signal's reason when it is aborted
 */
export async function writeProofPng(
  out: string,
  pages: readonly ProofPage[],
  sheet: { type: ProofType; pictures: PrintPictures },
  signal?: AbortSignal,
): Promise<string[]> {
  const paths = pagePaths(out, pages.length);
  for (const [k, page] of pages.entries()) {
    const { widthPx, heightPx, pixels } = await drawPage(page, sheet, signal);
    const picture = { widthPx, heightPx, channels: 3, pixels, format: 'png', densityPpi: pagePpi } as const;
    await writePicture(paths[k], picture, { signal });
  }
  return paths;
}

/** Where the pages go. */
export function pagePaths(out: string, pageCount: number): string[] {
  if (pageCount === 1) return [out];
  const extension = extname(out);
  const stem = join(dirname(out), basename(out, extension));
  const digits = String(pageCount).length;
  return Array.from(
    { length: pageCount },
    (_, k) => `${stem}-${String(k + 1).padStart(digits, '0')}${extension}`,
  );
}

async function drawPage(
  page: ProofPage,
  { type, pictures }: { type: ProofType; pictures: PrintPictures },
  signal?: AbortSignal,
): Promise<{ widthPx: number; heightPx: number; pixels: Uint8Array }> {
  const perPt = pagePpi / pointsPerInch;
  const widthPx = Math.round(page.widthPt * perPt);
  const heightPx = Math.round(page.heightPt * perPt);
  const layers: { input: Buffer; left: number; top: number; raw?: sharpRaw }[] = [];
  for (const place of page.pictures) {
    const left = Math.round(place.xPt * perPt);
    const top = Math.round(place.yPt * perPt);
    const size = {
      widthPx: Math.max(1, Math.min(widthPx - left, Math.round(place.widthPt * perPt))),
      heightPx: Math.max(1, Math.min(heightPx - top, Math.round(place.heightPt * perPt))),
    };
    const input = await pictures.rgb(page, place, size, signal);
    if (input)
      layers.push({ input, left, top, raw: { width: size.widthPx, height: size.heightPx, channels: 3 } });
  }
  // Drawn last: a picture that failed has left words on the page.
  layers.push({ input: Buffer.from(drawing(page, type, widthPx, heightPx)), left: 0, top: 0 });
  const canvas = sharp({
    create: { width: widthPx, height: heightPx, channels: 3, background: '#ffffff' },
    limitInputPixels: false,
  });
  const composed = canvas.composite(layers).removeAlpha().raw().toBuffer();
  return { widthPx, heightPx, pixels: await unlessAborted(composed, signal) };
}

type sharpRaw = { width: number; height: number; channels: 3 };

/** Rules, marks, boxes and type as an SVG without a single text element. */
function drawing(page: ProofPage, type: ProofType, widthPx: number, heightPx: number): string {
  const stroke = `fill="none" stroke="${hairlineColour}" stroke-width="${hairlinePt}"`;
  const rules = page.rules.map(({ xPt, yPt, widthPt }) => `<path ${stroke} d="M${xPt} ${yPt}h${widthPt}"/>`);
  const boxes = page.boxes.map(
    ({ xPt, yPt, widthPt, heightPt }) =>
      `<rect ${stroke} x="${xPt}" y="${yPt}" width="${widthPt}" height="${heightPt}"/>`,
  );
  const marks = page.marks.map(
    ({ xPt, yPt, toXPt, toYPt }) =>
      `<path stroke="${markColour}" stroke-width="${hairlinePt}" d="M${xPt} ${yPt}L${toXPt} ${toYPt}"/>`,
  );
  const texts = page.texts.map(({ text, style, xPt, baselinePt }) =>
    type.outlines(text, style, xPt, baselinePt),
  );
  return (
    `<svg xmlns="http://www.w3.org/2000/svg" width="${widthPx}" height="${heightPx}" ` +
    `viewBox="0 0 ${page.widthPt} ${page.heightPt}">${rules.join('')}${marks.join('')}${boxes.join('')}${texts.join('')}</svg>`
  );
}
