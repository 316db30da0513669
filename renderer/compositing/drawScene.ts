import type { Stratum } from '../../core/parameters/table.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import { bandView, cutSourceY } from '../geometry/sectionLayout.ts';
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

/** A side of the split, in device pixels, and whether the photo alone stands there. */
export interface DrawnSide {
  side: 'left' | 'right';
  isBare: boolean;
  rect: Rect;
}

/** @param isCompared other pieces stand on the left of the split; the photo alone does otherwise */
export function drawnSides(scene: Scene, isCompared: boolean): DrawnSide[] {
  const { view, photo, bare, split01 } = scene;
  const widthPx = Math.round(photo.widthPx * view.scale);
  const heightPx = Math.round(photo.heightPx * view.scale);
  const splitPx = split01 === null ? 0 : Math.round(widthPx * split01);
  const leftWidthPx = bare ? widthPx : splitPx;
  const rect = (leftPx: number, rightPx: number): Rect => ({
    xPx: view.originXPx + leftPx,
    yPx: view.originYPx,
    widthPx: rightPx - leftPx,
    heightPx,
  });
  const sides: DrawnSide[] = [
    { side: 'left', isBare: bare || !isCompared, rect: rect(0, leftWidthPx) },
    { side: 'right', isBare: false, rect: rect(leftWidthPx, widthPx) },
  ];
  return sides.filter((one) => one.rect.widthPx > 0);
}

/**
 * Draws the picture, or the photo, or two on either side of the split.
 * @param sheets lie one over the other
 * @param left what stands on the left of the split; null for the photo alone
 */
export function drawPicture(
  context: Context,
  scene: Scene,
  sheets: readonly PictureSheet[],
  left: readonly PictureSheet[] | null,
): void {
  fitCanvas(context, scene.stage.widthPx, scene.stage.heightPx);
  for (const { side, isBare, rect } of drawnSides(scene, left !== null)) {
    context.save();
    context.beginPath();
    context.rect(rect.xPx, rect.yPx, rect.widthPx, rect.heightPx);
    context.clip();
    for (const sheet of side === 'left' && !isBare ? left! : sheets) {
      const place = sheet.place(scene.view);
      setSmoothing(context, place.magnification);
      const canvas = isBare ? sheet.bareCanvas(scene.parameters) : sheet.paintedCanvas;
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
  const cutRow = cutSourceY(scene.cut01, scene.photo) / 2 ** sheet.level - sheet.region.yPx;
  // As many rows as the thickest band shows, so that a strip serves every strength.
  const reachRows = Math.ceil(scene.section.heightPx / scene.bands.length / magnification / 2) + 2;
  const firstRow = Math.max(0, Math.floor(cutRow) - reachRows);
  const endRow = Math.min(sheet.region.heightPx, Math.ceil(cutRow) + reachRows);
  // One pixel more on either side, so that smoothing finds the neighbours it would find in the whole picture.
  const firstColumn = Math.max(0, Math.floor((leftPx - place.x) / magnification) - 1);
  const endColumn = Math.min(sheet.region.widthPx, Math.ceil((rightPx - place.x) / magnification) + 1);
  if (endRow <= firstRow || endColumn <= firstColumn) return;
  const rows = { firstRow, rowCount: endRow - firstRow };
  const columns = { firstColumn, columnCount: endColumn - firstColumn };
  const strip = sheet.strip(stratum, { ...rows, ...columns }, scene.parameters['line.colour']);
  setSmoothing(context, magnification);
  context.drawImage(
    strip,
    0,
    0,
    columns.columnCount,
    rows.rowCount,
    place.x + firstColumn * magnification,
    place.y + firstRow * magnification,
    columns.columnCount * magnification,
    rows.rowCount * magnification,
  );
}
