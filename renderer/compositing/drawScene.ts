import type { Stratum } from '../../core/parameters/table.ts';
import { bandView } from '../geometry/sectionLayout.ts';
import { stripPixels } from './bandStrip.ts';
import type { Scene } from './messages.ts';
import type { PictureSheet } from './pictureSheet.ts';

type Context = OffscreenCanvasRenderingContext2D;

/** From this size on a pixel is shown as the square it is. */
const squarePixelsFrom = 2;

function fitCanvas(context: Context, widthPx: number, heightPx: number): void {
  if (context.canvas.width !== widthPx || context.canvas.height !== heightPx) {
    context.canvas.width = Math.max(1, widthPx);
    context.canvas.height = Math.max(1, heightPx);
  } else context.clearRect(0, 0, widthPx, heightPx);
}

function setSmoothing(context: Context, magnification: number): void {
  context.imageSmoothingEnabled = magnification !== 1 && magnification < squarePixelsFrom;
  context.imageSmoothingQuality = magnification < 1 ? 'medium' : 'low';
}

/** Draws the picture, or the photo, or both on either side of the split. `sheets` lie one over the other. */
export function drawPicture(context: Context, scene: Scene, sheets: readonly PictureSheet[]): void {
  fitCanvas(context, scene.stage.widthPx, scene.stage.heightPx);
  const { view, photo } = scene;
  const widthPx = Math.round(photo.widthPx * view.scale);
  const heightPx = Math.round(photo.heightPx * view.scale);
  const splitPx = scene.split01 === null ? 0 : Math.round(widthPx * scene.split01);
  const bareWidthPx = scene.bare ? widthPx : splitPx;
  for (const side of ['bare', 'painted'] as const) {
    const leftPx = side === 'bare' ? 0 : bareWidthPx;
    const rightPx = side === 'bare' ? bareWidthPx : widthPx;
    if (rightPx <= leftPx) continue;
    context.save();
    context.beginPath();
    context.rect(view.originXPx + leftPx, view.originYPx, rightPx - leftPx, heightPx);
    context.clip();
    for (const sheet of sheets) {
      const place = sheet.place(view);
      setSmoothing(context, place.magnification);
      const canvas = side === 'bare' ? sheet.bareCanvas(scene.parameters) : sheet.paintedCanvas;
      context.drawImage(canvas, place.x, place.y, place.width, place.height);
    }
    context.restore();
  }
}

/** Draws every band of the Section from the strata's own pixels. */
export function drawSection(context: Context, scene: Scene, sheets: readonly PictureSheet[]): void {
  fitCanvas(context, scene.section.widthPx, scene.section.heightPx);
  const { leftPx, rightPx } = scene.bandSpan;
  for (const band of scene.bands) {
    context.save();
    context.beginPath();
    context.rect(leftPx, band.topPx, rightPx - leftPx, band.thicknessPx);
    context.clip();
    for (const sheet of sheets) drawStrip(context, scene, sheet, band.stratum, band.topPx, band.thicknessPx);
    context.restore();
  }
}

function drawStrip(
  context: Context,
  scene: Scene,
  sheet: PictureSheet,
  stratum: Stratum,
  topPx: number,
  thicknessPx: number,
): void {
  const band = { stratum, topPx, thicknessPx, slotTopPx: topPx, slotHeightPx: thicknessPx };
  const place = sheet.place(bandView(scene.cut01, band, scene.view, scene.photo));
  const { magnification } = place;
  const { leftPx, rightPx } = scene.bandSpan;
  // One pixel more on every side, so that smoothing finds the neighbours it would find in the whole picture.
  const firstRow = Math.max(0, Math.floor((topPx - place.y) / magnification) - 1);
  const endRow = Math.min(
    sheet.region.heightPx,
    Math.ceil((topPx + thicknessPx - place.y) / magnification) + 1,
  );
  const firstColumn = Math.max(0, Math.floor((leftPx - place.x) / magnification) - 1);
  const endColumn = Math.min(sheet.region.widthPx, Math.ceil((rightPx - place.x) / magnification) + 1);
  if (endRow <= firstRow || endColumn <= firstColumn) return;
  const rowCount = endRow - firstRow;
  const columnCount = endColumn - firstColumn;
  const strip = stripPixels(
    sheet.held.strata,
    stratum,
    { firstRow, rowCount, firstColumn, columnCount },
    scene.parameters['line.colour'],
  );
  const canvas = stripCanvas(strip);
  setSmoothing(context, magnification);
  context.drawImage(
    canvas,
    0,
    0,
    columnCount,
    rowCount,
    place.x + firstColumn * magnification,
    place.y + firstRow * magnification,
    columnCount * magnification,
    rowCount * magnification,
  );
}

let strips: OffscreenCanvas | null = null;

/** One canvas serves all strips; it only ever grows. */
function stripCanvas(strip: ImageData): OffscreenCanvas {
  strips ??= new OffscreenCanvas(1, 1);
  if (strips.width < strip.width) strips.width = strip.width;
  if (strips.height < strip.height) strips.height = strip.height;
  strips.getContext('2d', { willReadFrequently: true })!.putImageData(strip, 0, 0);
  return strips;
}
