import { mmPerInch, trimMarkMm } from '../../core/print/printPlan.ts';
import type { PlannedPrint } from './printMeasures.ts';

/** A sheet to scale, in device pixels of its drawing. */
export interface DrawnSheet {
  /** Device pixels a millimetre. */
  scale: number;
  leftPx: number;
  topPx: number;
  widthPx: number;
  heightPx: number;
}

/** Lays a sheet into a drawing, as large as it goes. */
export function fitSheet(plan: PlannedPrint, room: { widthPx: number; heightPx: number }): DrawnSheet {
  const outsideMm = (plan.margins.outsidePx / plan.ppi) * mmPerInch;
  const widthMm = plan.widthMm + 2 * outsideMm;
  const heightMm = plan.heightMm + 2 * outsideMm;
  const scale = Math.min(room.widthPx / widthMm, room.heightPx / heightMm);
  const [widthPx, heightPx] = [Math.max(1, widthMm * scale), Math.max(1, heightMm * scale)];
  return {
    scale,
    widthPx,
    heightPx,
    leftPx: (room.widthPx - widthPx) / 2,
    topPx: (room.heightPx - heightPx) / 2,
  };
}

export interface SheetColours {
  paper: string;
  edge: string;
  paint: string;
  cut: string;
  mark: string;
}

/** Draws the sheet: paper, picture with its bleed mirrored beyond the cut, the cut itself, and marks. */
export function drawSheet(
  context: CanvasRenderingContext2D,
  sheet: DrawnSheet,
  plan: PlannedPrint,
  crop01: { x: number; y: number; width: number; height: number },
  picture: (CanvasImageSource & { width: number; height: number }) | null,
  colours: SheetColours,
  linePx: number,
): void {
  const { scale, leftPx, topPx, widthPx, heightPx } = sheet;
  const mm = (px: number) => (px / plan.ppi) * mmPerInch * scale;
  const bleed = mm(plan.margins.bleedPx);
  const inset = mm(plan.margins.outsidePx);
  const print = {
    x: leftPx + inset,
    y: topPx + inset,
    width: widthPx - 2 * inset,
    height: heightPx - 2 * inset,
  };
  context.fillStyle = colours.paper;
  context.fillRect(leftPx, topPx, widthPx, heightPx);
  context.save();
  context.beginPath();
  context.rect(print.x - bleed, print.y - bleed, print.width + 2 * bleed, print.height + 2 * bleed);
  context.clip();
  context.fillStyle = colours.paint;
  context.fillRect(leftPx, topPx, widthPx, heightPx);
  if (picture) drawMirrored(context, picture, crop01, print);
  context.restore();
  context.strokeStyle = colours.edge;
  context.lineWidth = linePx;
  context.strokeRect(leftPx + linePx / 2, topPx + linePx / 2, widthPx - linePx, heightPx - linePx);
  if (bleed > 0) {
    context.strokeStyle = colours.cut;
    context.setLineDash([3 * linePx, 2 * linePx]);
    context.strokeRect(print.x, print.y, print.width, print.height);
    context.setLineDash([]);
  }
  if (plan.margins.marks) drawMarks(context, sheet, inset, trimMarkMm.length * scale, colours.mark, linePx);
}

/** The print itself, and its mirror pictures on all sides; the clip leaves as much of them as the bleed is wide. */
function drawMirrored(
  context: CanvasRenderingContext2D,
  picture: CanvasImageSource & { width: number; height: number },
  crop01: { x: number; y: number; width: number; height: number },
  print: { x: number; y: number; width: number; height: number },
): void {
  const source = [
    crop01.x * picture.width,
    crop01.y * picture.height,
    crop01.width * picture.width,
    crop01.height * picture.height,
  ] as const;
  for (const column of [-1, 1, 0])
    for (const row of [-1, 1, 0]) {
      context.save();
      context.translate(
        print.x + print.width / 2 + column * print.width,
        print.y + print.height / 2 + row * print.height,
      );
      context.scale(column === 0 ? 1 : -1, row === 0 ? 1 : -1);
      context.drawImage(picture, ...source, -print.width / 2, -print.height / 2, print.width, print.height);
      context.restore();
    }
}

function drawMarks(
  context: CanvasRenderingContext2D,
  { leftPx, topPx, widthPx, heightPx }: DrawnSheet,
  inset: number,
  length: number,
  colour: string,
  linePx: number,
): void {
  context.strokeStyle = colour;
  context.lineWidth = linePx;
  context.beginPath();
  for (const x of [leftPx + inset, leftPx + widthPx - inset])
    for (const [from, to] of [
      [topPx, topPx + length],
      [topPx + heightPx - length, topPx + heightPx],
    ]) {
      context.moveTo(x, from);
      context.lineTo(x, to);
    }
  for (const y of [topPx + inset, topPx + heightPx - inset])
    for (const [from, to] of [
      [leftPx, leftPx + length],
      [leftPx + widthPx - length, leftPx + widthPx],
    ]) {
      context.moveTo(from, y);
      context.lineTo(to, y);
    }
  context.stroke();
}
