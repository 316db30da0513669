import { basename, join, resolve } from 'node:path';
import { lying, type Paper, papers, readPaper } from '../../core/proof/paper.ts';
import { firstFree } from '../host/placeFile.ts';
import type { MadeProof, ProofOrder } from '../proof/makeProof.ts';
import type { ProofSource } from '../proof/proofSource.ts';
import { ProgressLine } from './progressLine.ts';
import { readNumber, readWhole, readWords } from './readWords.ts';
import { type Command, exitCode, UsageError } from './usage.ts';

const options = {
  out: { type: 'string' },
  paper: { type: 'string' },
  landscape: { type: 'boolean' },
  columns: { type: 'string' },
  margin: { type: 'string' },
  title: { type: 'string' },
  'trim-marks': { type: 'boolean' },
  workers: { type: 'string' },
  json: { type: 'boolean' },
} as const;

const defaultPaper = 'A4';
const defaultColumns = { upright: '3', lying: '4' };
const defaultMarginMm = '14';

export const proofCommand: Command = {
  name: 'proof',
  usage: 'proof FOLDER [--out FILE] [--paper A4] [--columns N] [--landscape] [--title TEXT]',
  summary: 'Sets the paintings of a folder on a proof sheet, a PDF or PNG to send for approval.',
  options: [
    ['--out FILE', 'The sheet: .pdf, or .png for a picture of each page. In the folder unless given.'],
    ['--paper NAME', 'A5, A4, A3, A2, letter, legal, or a size in mm such as 200x250; A4 unless given.'],
    ['--landscape', 'Lays the paper on its long edge.'],
    ['--columns N', 'Pictures beside one another; 3, or 4 on paper that lies, unless given.'],
    ['--margin MM', `Around the page; ${defaultMarginMm} unless given.`],
    ['--title TEXT', "The series' title; the folder's name unless given."],
    ['--trim-marks', 'Marks at each picture where its print will be cut.'],
    ['--workers N', 'Worker threads, where photos are painted for the sheet.'],
    ['--json', 'Prints one JSON object with everything that was done.'],
  ],
  run: proof,
};

async function proof(words: string[]): Promise<number> {
  const { values, positionals } = readWords(words, options, { least: 1, most: 1, what: 'one folder' });
  const folder = resolve(positionals[0]);
  const name = basename(folder) || 'series';
  const paper = readSheet(values.paper ?? defaultPaper, values.landscape === true);
  const isLying = paper.widthMm > paper.heightMm;
  const columns = readWhole(
    values.columns ?? defaultColumns[isLying ? 'lying' : 'upright'],
    '--columns',
    1,
    24,
  );
  const marginMm = readNumber(values.margin ?? defaultMarginMm, '--margin', 5, 100);
  const workers = values.workers === undefined ? undefined : readWhole(values.workers, '--workers', 1, 64);
  const out = values.out ?? (await firstFree(join(folder, `${name}.proof.pdf`)));
  const trimMarks = values['trim-marks'] === true;
  const order = { out, paper, columns, marginMm, title: values.title ?? name, date: new Date(), trimMarks };
  // Loaded here: no other command needs typefaces and a PDF writer.
  const { folderSources } = await import('../proof/folderSources.ts');
  const { ProofPainter } = await import('../proof/proofPainter.ts');
  const painter = new ProofPainter(workers);
  const progress = new ProgressLine();
  try {
    const { sources, remarks } = await folderSources(folder, painter);
    const made = await makeInRange(sources, order, (fraction01) => progress.update(fraction01, 'proof'));
    progress.clear();
    report(values.json === true, { folder, ...made, remarks: [...remarks, ...made.remarks] });
    return made.faults.length > 0 ? exitCode.failed : exitCode.done;
  } finally {
    progress.clear();
    await painter.close();
  }
}

function readSheet(text: string, landscape: boolean): Paper {
  const paper = readPaper(text);
  if (!paper)
    throw new UsageError(
      `Expected one of ${Object.keys(papers).join(', ')} or a size of 60 to 2000 mm such as 200x250 for --paper, received ${text}`,
    );
  return landscape ? lying(paper) : paper;
}

/** More columns than the paper has room for is the words' fault. */
async function makeInRange(
  sources: readonly ProofSource[],
  order: ProofOrder,
  onProgress: (fraction01: number) => void,
): Promise<MadeProof> {
  const { makeProof } = await import('../proof/makeProof.ts');
  try {
    return await makeProof(sources, order, { onProgress });
  } catch (failure) {
    if (failure instanceof RangeError) throw new UsageError(failure.message, { cause: failure });
    throw failure;
  }
}

function report(asJson: boolean, made: MadeProof & { folder: string }): void {
  if (asJson) {
    process.stdout.write(`${JSON.stringify(made, null, 2)}\n`);
    return;
  }
  for (const line of [...made.faults.map(({ message }) => message), ...made.remarks])
    process.stderr.write(`${line}\n`);
  const pages = made.pages === 1 ? '1 page' : `${made.pages} pages`;
  const frames = made.frames === 1 ? '1 frame' : `${made.frames} frames`;
  for (const file of made.files) process.stdout.write(`${file}\n`);
  process.stdout.write(`${frames} on ${pages}\n`);
}
