import {
  type PlacedText,
  type ProofCaption,
  type ProofFrame,
  type ProofPage,
  type ProofSettings,
  pointsPerInch,
  pointsPerMm,
  type RectPt,
  styleTable,
  type TypeMeasure,
  type TypeStyle,
} from './proofPage.ts';
import { marksReachPt, trimMarksOf } from './trimMarks.ts';
import { wrapText } from './wrapText.ts';

/** No picture is printed with fewer pixels an inch: press practice for painterly pictures. */
export const fewestPpi = 200;

const gutterPt = 6 * pointsPerMm;
const rowGapPt = 6 * pointsPerMm;
const narrowestCellPt = 15 * pointsPerMm;
/** Between a picture and its caption. */
const plainCaptionGapPt = 4;
const footPt = 20;
const ruleGapPt = 12;
/** Where no picture is, its place is shown in this shape. */
const emptyAspect = 2 / 3;
const boxPaddingPt = 7;

const linesAtMost = { name: 2, preset: 2, figures: 3, note: 4, fault: 6 };

interface Cell {
  frame: number;
  widthPt: number;
  heightPt: number;
  caption: CaptionLine[];
  captionPt: number;
}

type CaptionLine = Omit<PlacedText, 'xPt' | 'baselinePt'>;

/**
 * Lays a series on sheets: rows of pictures that stand on a common line with their captions beneath, as many
 * rows to a sheet as fit. No picture is taller than its cell is wide, so that upright and lying pictures of one
 * shape get the same area, and none is enlarged beyond `fewestPpi`.
 * @param frames in order; not modified
 * @returns one page at least
 * @throws RangeError where the columns leave less than 15 mm to a picture, or the margins no room
 */
export function layProof(
  frames: readonly ProofFrame[],
  settings: ProofSettings,
  type: TypeMeasure,
): ProofPage[] {
  const sheet = sheetOf(settings);
  const pages: ProofPage[] = [];
  let yPt = 0;
  const turnPage = () => {
    const page = emptyPage(sheet);
    yPt = pages.length === 0 ? placeTitle(page, frames.length, settings, sheet, type) : 0;
    if (pages.length > 0) yPt = placeRunningHead(page, settings, sheet, type);
    pages.push(page);
  };
  turnPage();
  const captions = frames.map((frame) => captionLines(frame.caption, sheet.cellPt, type));
  let isPageEmpty = true;
  for (let first = 0; first < frames.length; first += settings.columns) {
    const numbers = frames.slice(first, first + settings.columns).map((_, k) => first + k);
    const rowOf = (tallestPt: number) =>
      numbers.map((k) => cellOf(frames[k], k, captions[k], sheet.cellPt, tallestPt));
    let row = rowOf(sheet.cellPt);
    if (!isPageEmpty && yPt + heightOf(row, sheet) > sheet.bottomPt) {
      turnPage();
      isPageEmpty = true;
    }
    // A row that is taller than an empty page gives up some of its pictures' height.
    if (yPt + heightOf(row, sheet) > sheet.bottomPt)
      row = rowOf(
        Math.max(1, sheet.bottomPt - yPt - captionHeightOf(row) - sheet.captionGapPt - sheet.markPt),
      );
    placeRow(pages[pages.length - 1], row, frames, yPt, sheet, type);
    yPt += heightOf(row, sheet) + rowGapPt;
    isPageEmpty = false;
  }
  pages.forEach((page, k) => {
    placeFoot(page, `${k + 1} / ${pages.length}`, sheet, type);
  });
  return pages;
}

interface Sheet {
  /** Between a picture and its caption. */
  captionGapPt: number;
  /** Above a row's pictures, for their marks. */
  markPt: number;
  widthPt: number;
  heightPt: number;
  marginPt: number;
  contentPt: number;
  cellPt: number;
  /** Where rows end. */
  bottomPt: number;
}

function sheetOf({ paper, columns, marginMm, trimMarks = false }: ProofSettings): Sheet {
  const widthPt = paper.widthMm * pointsPerMm;
  const heightPt = paper.heightMm * pointsPerMm;
  const marginPt = marginMm * pointsPerMm;
  const contentPt = widthPt - 2 * marginPt;
  const cellPt = (contentPt - (columns - 1) * gutterPt) / columns;
  if (!(cellPt >= narrowestCellPt))
    throw new RangeError(
      `Expected at most ${Math.max(0, Math.floor((contentPt + gutterPt) / (narrowestCellPt + gutterPt)))} columns on this paper, received ${columns}`,
    );
  const bottomPt = heightPt - marginPt - footPt;
  // Title, a caption of all its lines, and a picture of 15 mm.
  if (bottomPt - marginPt < 150 + narrowestCellPt)
    throw new RangeError(`Expected margins that leave room for a picture, received ${marginMm} mm`);
  const markPt = trimMarks ? marksReachPt : 0;
  const captionGapPt = plainCaptionGapPt + markPt;
  return { widthPt, heightPt, marginPt, contentPt, cellPt, bottomPt, captionGapPt, markPt };
}

function emptyPage({ widthPt, heightPt }: Sheet): ProofPage {
  return { widthPt, heightPt, pictures: [], texts: [], rules: [], marks: [], boxes: [] };
}

/** @returns where the rows begin */
function placeTitle(
  page: ProofPage,
  frameCount: number,
  settings: ProofSettings,
  sheet: Sheet,
  type: TypeMeasure,
): number {
  const { marginPt, contentPt } = sheet;
  const count = frameCount === 1 ? '1 frame' : `${frameCount} frames`;
  let baselinePt = marginPt + 17;
  for (const text of wrapText(settings.title, 'title', contentPt, 2, type)) {
    page.texts.push({ text, style: 'title', xPt: marginPt, baselinePt });
    baselinePt += styleTable.title.leadingPt;
  }
  baselinePt -= styleTable.title.leadingPt - 16;
  page.texts.push({ text: count, style: 'running', xPt: marginPt, baselinePt });
  placeAtRight(page, settings.date, 'date', baselinePt, sheet, type);
  return placeRule(page, baselinePt + 7, sheet);
}

function placeRunningHead(page: ProofPage, settings: ProofSettings, sheet: Sheet, type: TypeMeasure): number {
  const baselinePt = sheet.marginPt + 9;
  const dateWidthPt = placeAtRight(page, settings.date, 'date', baselinePt, sheet, type);
  const [title = ''] = wrapText(settings.title, 'running', sheet.contentPt - dateWidthPt - gutterPt, 1, type);
  page.texts.push({ text: title, style: 'running', xPt: sheet.marginPt, baselinePt });
  return placeRule(page, baselinePt + 6, sheet);
}

function placeRule(page: ProofPage, yPt: number, { marginPt, contentPt }: Sheet): number {
  page.rules.push({ xPt: marginPt, yPt, widthPt: contentPt });
  return yPt + ruleGapPt;
}

/** @returns the text's width */
function placeAtRight(
  page: ProofPage,
  text: string,
  style: TypeStyle,
  baselinePt: number,
  { marginPt, contentPt }: Sheet,
  type: TypeMeasure,
): number {
  const widthPt = type.widthPt(text, style);
  page.texts.push({ text, style, xPt: marginPt + contentPt - widthPt, baselinePt });
  return widthPt;
}

function placeFoot(page: ProofPage, folio: string, sheet: Sheet, type: TypeMeasure): void {
  const baselinePt = sheet.heightPt - sheet.marginPt;
  page.texts.push({ text: 'Proof sheet', style: 'date', xPt: sheet.marginPt, baselinePt });
  placeAtRight(page, folio, 'folio', baselinePt, sheet, type);
}

function captionLines(caption: ProofCaption, widthPt: number, type: TypeMeasure): CaptionLine[] {
  const set = (text: string, style: 'name' | 'preset' | 'figures' | 'note') =>
    wrapText(text, style, widthPt, linesAtMost[style], type).map(
      (line, k): CaptionLine =>
        k > 0
          ? { text: line, style, continues: true }
          : { text: line, style, whole: line === text ? undefined : text },
    );
  return [
    ...set(caption.name, 'name'),
    ...set(caption.preset, 'preset'),
    ...caption.figures.flatMap((line) => set(line, 'figures')),
    ...set(caption.note, 'note'),
  ];
}

function cellOf(
  frame: ProofFrame,
  number: number,
  caption: CaptionLine[],
  cellPt: number,
  tallestPt: number,
): Cell {
  const captionPt = caption.reduce((sumPt, line) => sumPt + styleTable[line.style].leadingPt, 0);
  const { widthPx, heightPx } = frame.sizePx ?? { widthPx: 1, heightPx: emptyAspect };
  const ownPt = frame.sizePx ? pointsPerInch / fewestPpi : Number.POSITIVE_INFINITY;
  const scalePt = Math.min(cellPt / widthPx, tallestPt / heightPx, ownPt);
  // Down to what a PDF's numbers tell apart, so that no picture falls below the fewest pixels an inch.
  const rounded = (edgePt: number) => Math.max(0.01, Math.floor(edgePt * 100) / 100);
  const widthPt = rounded(widthPx * scalePt);
  return { frame: number, widthPt, heightPt: rounded(heightPx * scalePt), caption, captionPt };
}

function captionHeightOf(row: readonly Cell[]): number {
  return Math.max(...row.map((cell) => cell.captionPt));
}

function pictureHeightOf(row: readonly Cell[]): number {
  return Math.max(...row.map((cell) => cell.heightPt));
}

function heightOf(row: readonly Cell[], { captionGapPt, markPt }: Sheet): number {
  return markPt + pictureHeightOf(row) + captionGapPt + captionHeightOf(row);
}

function placeRow(
  page: ProofPage,
  row: readonly Cell[],
  frames: readonly ProofFrame[],
  topPt: number,
  sheet: Sheet,
  type: TypeMeasure,
): void {
  const standPt = topPt + sheet.markPt + pictureHeightOf(row);
  row.forEach((cell, column) => {
    const xPt = sheet.marginPt + column * (sheet.cellPt + gutterPt);
    const { widthPt, heightPt } = cell;
    const place = { xPt, yPt: standPt - heightPt, widthPt, heightPt };
    const { sizePx, fault } = frames[cell.frame];
    if (!sizePx) addFault(page, place, fault, type);
    else {
      page.pictures.push({ frame: cell.frame, sizePx, ...place });
      if (sheet.markPt > 0) page.marks.push(...trimMarksOf(place));
    }
    let yPt = standPt + sheet.captionGapPt;
    for (const line of cell.caption) {
      const { leadingPt } = styleTable[line.style];
      yPt += leadingPt;
      page.texts.push({ ...line, xPt, baselinePt: yPt - leadingPt * 0.22 });
    }
  });
}

/**
 * Says in a picture's place why it is not there.
 * @param page gets a hairline frame and words in it
 */
export function addFault(
  page: Pick<ProofPage, 'boxes' | 'texts'>,
  place: RectPt,
  fault: string,
  type: TypeMeasure,
): void {
  const { xPt, yPt, widthPt, heightPt } = place;
  page.boxes.push({ xPt, yPt, widthPt, heightPt });
  const { leadingPt } = styleTable.fault;
  const room = Math.floor((heightPt - 2 * boxPaddingPt) / leadingPt);
  const atMost = Math.max(0, Math.min(linesAtMost.fault, room));
  const lines = wrapText(fault, 'fault', widthPt - 2 * boxPaddingPt, atMost, type);
  const texts: PlacedText[] = lines.map((text, k) => ({
    text,
    style: 'fault',
    xPt: xPt + boxPaddingPt,
    baselinePt: yPt + boxPaddingPt + (k + 1) * leadingPt - leadingPt * 0.22,
  }));
  page.texts.push(...texts);
}
