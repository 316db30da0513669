import { extname } from 'node:path';
import { dateWords, sizeWords } from '../../core/proof/captionWords.ts';
import { layProof } from '../../core/proof/layProof.ts';
import type { ProofFrame, ProofSettings } from '../../core/proof/proofPage.ts';
import { FileError } from '../files/fileError.ts';
import { assertWritable, refuseOverwritingOriginal } from '../files/outputPath.ts';
import { faultWords, PrintPictures } from './printPictures.ts';
import { readProofFacts } from './proofPicture.ts';
import type { ProofFault, ProofSource } from './proofSource.ts';
import { ProofType } from './proofType.ts';
import { writeProofPdf } from './writeProofPdf.ts';
import { writeProofPng } from './writeProofPng.ts';

export type ProofFormat = 'pdf' | 'png';

export interface ProofOrder extends Omit<ProofSettings, 'date'> {
  /** Where the sheet shall be: `.pdf` or `.png`. */
  out: string;
  /** Printed on the sheet. */
  date: Date;
}

/** A proof that was made. */
export interface MadeProof {
  /** One PDF, or a PNG for each page. */
  files: string[];
  pages: number;
  frames: number;
  /** Frames that could not be shown. */
  faults: ProofFault[];
  /** What else there is to say, in plain sentences; usually empty. */
  remarks: string[];
}

/** @throws FileError where the name is neither that of a PDF nor of a PNG */
export function proofFormatFor(out: string): ProofFormat {
  const extension = extname(out).toLowerCase();
  if (extension === '.pdf') return 'pdf';
  if (extension === '.png') return 'png';
  throw new FileError(out, 'a proof sheet is a PDF or a PNG', 'Use a name that ends in .pdf or .png.');
}

/** Reading the headers takes this share of the time. */
const headerShare01 = 0.05;

/**
 * Makes a proof sheet of a series. A frame that cannot be read is said to be so in its place, and the rest go on.
 * @param sources in the order of the sheet
 * @throws FileError for the output; RangeError where paper, margins and columns do not go together; the signal's
 *   reason when it is aborted
 */
export async function makeProof(
  sources: readonly ProofSource[],
  order: ProofOrder,
  options: { signal?: AbortSignal; onProgress?: (fraction01: number) => void } = {},
): Promise<MadeProof> {
  const { signal, onProgress } = options;
  const { out, title, date } = order;
  const format = proofFormatFor(out);
  for (const { picture } of sources) await refuseOverwritingOriginal(picture.path, out);
  await assertWritable(out);
  const type = new ProofType();
  const pictures = new PrintPictures(sources, type, (done01) =>
    onProgress?.(headerShare01 + (1 - headerShare01) * done01),
  );
  const frames: ProofFrame[] = [];
  for (const source of sources) {
    frames.push(await lookAt(source, pictures, signal));
    onProgress?.((headerShare01 * frames.length) / sources.length);
  }
  const pages = layProof(frames, { ...order, date: dateWords(date) }, type);
  const sheet = { title, date, type, pictures };
  let files = [out];
  if (format === 'pdf') await writeProofPdf(out, pages, sheet, signal);
  else files = await writeProofPng(out, pages, sheet, signal);
  return {
    files,
    pages: pages.length,
    frames: frames.length,
    faults: pictures.faults,
    remarks: frames.flatMap((frame) => strangeLetters(frame, type)),
  };
}

async function lookAt(
  { picture, caption }: ProofSource,
  pictures: PrintPictures,
  signal?: AbortSignal,
): Promise<ProofFrame> {
  const named = { ...caption, name: printable(caption.name) };
  try {
    const { widthPx, heightPx, ppi } = await readProofFacts(picture, signal);
    const figures = [sizeWords(widthPx, heightPx, ppi), ...caption.figures];
    return { sizePx: { widthPx, heightPx }, fault: '', caption: { ...named, figures } };
  } catch (failure) {
    signal?.throwIfAborted();
    pictures.noteFault(picture.path, failure instanceof Error ? failure.message : String(failure));
    return { sizePx: null, fault: faultWords(failure), caption: named };
  }
}

/** Letters put together as the fonts have them, and nothing that would break a line of type. */
function printable(name: string): string {
  return name.normalize('NFC').replaceAll(/\p{Cc}/gu, ' ');
}

function strangeLetters({ caption }: ProofFrame, type: ProofType): string[] {
  if (type.hasAll(caption.name, 'name')) return [];
  return [`${caption.name}: some letters are not in the typeface and are printed as boxes.`];
}
