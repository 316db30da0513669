import { execFile, execFileSync } from 'node:child_process';
import { promisify } from 'node:util';

const run = promisify(execFile);
const largestOutputBytes = 64 * 2 ** 20;

/** Why the tests with Poppler's tools (pdfinfo, pdffonts, pdfimages, pdftotext, pdftoppm) cannot run, or null. */
export const noPoppler = isThere() ? null : "Poppler's tools are not installed";

function isThere(): boolean {
  try {
    execFileSync('pdfinfo', ['-v'], { stdio: 'ignore' });
    return true;
  } catch {
    return false;
  }
}

async function poppler(tool: string, ...words: string[]): Promise<string> {
  const { stdout } = await run(tool, words, { maxBuffer: largestOutputBytes });
  return stdout;
}

/** Pages, and the size of each in points. */
export async function pdfPages(path: string): Promise<{ widthPt: number; heightPt: number }[]> {
  const out = await poppler('pdfinfo', '-f', '1', '-l', '9999', path);
  return [...out.matchAll(/^Page\s+\d+ size:\s+([\d.]+) x ([\d.]+) pts/gm)].map(([, width, height]) => ({
    widthPt: Number(width),
    heightPt: Number(height),
  }));
}

/** Fonts: whether each is embedded, and as a subset. */
export async function pdfFonts(
  path: string,
): Promise<{ name: string; embedded: boolean; subset: boolean }[]> {
  const lines = (await poppler('pdffonts', path)).trim().split('\n').slice(2);
  return lines.map((line) => {
    const [embedded, subset] = line.trim().split(/\s+/).slice(-5);
    return { name: line.split(/\s+/)[0], embedded: embedded === 'yes', subset: subset === 'yes' };
  });
}

export interface PdfPicture {
  page: number;
  widthPx: number;
  heightPx: number;
  encoding: string;
  xPpi: number;
  yPpi: number;
}

export async function pdfPictures(path: string): Promise<PdfPicture[]> {
  const lines = (await poppler('pdfimages', '-list', path)).trim().split('\n').slice(2);
  return lines.map((line) => {
    const cells = line.trim().split(/\s+/);
    const [page, widthPx, heightPx, xPpi, yPpi] = [0, 3, 4, 12, 13].map((k) => Number(cells[k]));
    return { page, widthPx, heightPx, encoding: cells[8], xPpi, yPpi };
  });
}

/** The pictures as they lie in the file, JPEGs as JPEGs. @param prefix of the files that are written */
export async function takePictures(path: string, prefix: string): Promise<void> {
  await poppler('pdfimages', '-all', path, prefix);
}

export async function pdfText(path: string): Promise<string> {
  return poppler('pdftotext', path, '-');
}

/** Draws one page. @returns the file, a PNG */
export async function drawPdfPage(path: string, page: number, ppi: number, prefix: string): Promise<string> {
  await poppler(
    'pdftoppm',
    '-r',
    `${ppi}`,
    '-f',
    `${page}`,
    '-l',
    `${page}`,
    '-singlefile',
    '-png',
    path,
    prefix,
  );
  return `${prefix}.png`;
}
