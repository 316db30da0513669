import PDFDocument from 'pdfkit';
import {
  hairlineColour,
  markColour,
  type ProofPage,
  pointsPerInch,
  styleTable,
} from '../../core/proof/proofPage.ts';
import { sharp } from '../files/imageLibrary.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { UnfinishedFile } from '../files/unfinishedFile.ts';
import type { PrintPictures } from './printPictures.ts';
import type { ProofType } from './proofType.ts';

/** More than the fewest a print needs, so that a look through a glass shows paint and not pixels. */
const picturePpi = 240;
const hairlinePt = 0.4;
/** Decoding runs on one thread a picture: two pictures at a time take little more than half the time. */
const madeAhead = 2;

/**
 * Writes the pages as a PDF, whole or not at all: type as embedded subsets, pictures as JPEGs.
 * @param date goes into the document's own data
 * @throws FileError where the file cannot be written; the signal's reason when it is aborted
 */
export async function writeProofPdf(
  out: string,
  pages: readonly ProofPage[],
  sheet: { title: string; date: Date; type: ProofType; pictures: PrintPictures },
  signal?: AbortSignal,
): Promise<void> {
  const { title, date, type, pictures } = sheet;
  const file = await UnfinishedFile.begin(out);
  try {
    const pdf = new PDFDocument({
      autoFirstPage: false,
      margin: 0,
      // No default typeface: its metrics would be looked for in a file.
      font: '',
      lang: 'en',
      displayTitle: true,
      info: { Title: title, Creator: 'Oxgall', Producer: 'Oxgall', CreationDate: date, ModDate: date },
    });
    await sayColours(pdf);
    for (const [key, bytes] of type.fontBytes()) pdf.registerFont(key, bytes);
    const pieces: Uint8Array[] = [];
    pdf.on('data', (piece: Uint8Array) => pieces.push(piece));
    const ended = new Promise<void>((resolve, reject) => {
      pdf.once('end', resolve);
      pdf.once('error', reject);
    });
    const flush = async () => {
      for (const piece of pieces.splice(0)) await file.append(piece, signal);
    };
    for (const page of pages) {
      pdf.addPage({ size: [page.widthPt, page.heightPt], margin: 0 });
      await drawPictures(pdf, page, pictures, flush, signal);
      drawRules(pdf, page);
      drawTexts(pdf, page.texts, type);
      await flush();
    }
    pdf.end();
    await ended;
    await flush();
    await file.finish();
  } catch (failure) {
    throw fileErrorFrom(out, failure);
  } finally {
    file.discard();
  }
}

type Pdf = InstanceType<typeof PDFDocument>;

/** Says that the document's RGB is sRGB (ISO 32000-1, 14.11.5), which else is whatever the printer takes it for. */
async function sayColours(pdf: Pdf): Promise<void> {
  const profile = pdf.ref({ N: 3, Alternate: 'DeviceRGB' });
  profile.end(await srgbProfile());
  const intent = pdf.ref({
    Type: 'OutputIntent',
    S: 'GTS_PDFA1',
    OutputConditionIdentifier: new String('sRGB IEC61966-2.1'),
    Info: new String('sRGB IEC61966-2.1'),
    DestOutputProfile: profile,
  });
  intent.end(undefined);
  // The writer itself offers this for archives alone, with a file that would have to lie beside the bundle.
  (pdf as unknown as { _root: { data: Record<string, unknown> } })._root.data.OutputIntents = [intent];
}

async function srgbProfile(): Promise<Buffer> {
  const white = { create: { width: 1, height: 1, channels: 3, background: '#ffffff' } } as const;
  const file = await sharp(white).withIccProfile('srgb').png().toBuffer();
  const { icc } = await sharp(file).metadata();
  if (!icc) throw new Error('Expected a profile of the image library, received none');
  return icc;
}

async function drawPictures(
  pdf: Pdf,
  page: ProofPage,
  pictures: PrintPictures,
  flush: () => Promise<void>,
  signal?: AbortSignal,
): Promise<void> {
  const ahead: Promise<Buffer | null>[] = [];
  for (const [k, place] of page.pictures.entries()) {
    for (let next = ahead.length; next < Math.min(k + madeAhead, page.pictures.length); next++) {
      const made = pictures.jpeg(page, page.pictures[next], picturePpi / pointsPerInch, signal);
      made.catch(() => {}); // It is noticed when its turn comes.
      ahead.push(made);
    }
    const jpeg = await ahead[k];
    if (!jpeg) continue;
    pdf.image(jpeg, place.xPt, place.yPt, { width: place.widthPt, height: place.heightPt });
    await flush();
  }
}

function drawRules(pdf: Pdf, page: ProofPage): void {
  pdf.lineWidth(hairlinePt).strokeColor(hairlineColour);
  for (const { xPt, yPt, widthPt } of page.rules)
    pdf
      .moveTo(xPt, yPt)
      .lineTo(xPt + widthPt, yPt)
      .stroke();
  for (const { xPt, yPt, widthPt, heightPt } of page.boxes) pdf.rect(xPt, yPt, widthPt, heightPt).stroke();
  pdf.strokeColor(markColour);
  for (const { xPt, yPt, toXPt, toYPt } of page.marks) pdf.moveTo(xPt, yPt).lineTo(toXPt, toYPt).stroke();
}

/**
 * Draws texts. Some are said a second time, for those who search and copy: what was broken into lines or shortened;
 * what has letters for which the typeface draws a box; page numbers, whose kerned gaps readers take for none.
 */
function drawTexts(pdf: Pdf, texts: ProofPage['texts'], type: ProofType): void {
  texts.forEach((text, k) => {
    const isSaid = text.whole !== undefined || text.style === 'folio' || !type.hasAll(text.text, text.style);
    let isOpen = k > 0 && text.continues === true;
    if (isSaid && !isOpen) {
      pdf.markContent('Span', { actual: text.whole ?? text.text });
      isOpen = true;
    }
    drawText(pdf, text, type);
    if (isOpen && texts[k + 1]?.continues !== true) pdf.endMarkedContent();
  });
}

function drawText(pdf: Pdf, { text, style, xPt, baselinePt }: ProofPage['texts'][number], type: ProofType) {
  const { sizePt, colour } = styleTable[style];
  let leftPt = xPt;
  for (const run of type.runs(text, style)) {
    pdf
      .font(run.font)
      .fontSize(sizePt)
      .fillColor(colour)
      .text(run.text, leftPt, baselinePt, { lineBreak: false, baseline: 'alphabetic' });
    leftPt += run.widthPt;
  }
}
