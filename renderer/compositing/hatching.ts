import type { Rect } from '../../core/pixels/photo.ts';
import { drawnSides } from './drawScene.ts';
import type { Scene } from './messages.ts';
import type { OutsideMarker } from './outsideMarker.ts';
import type { PictureSheet } from './pictureSheet.ts';

/** Rust, and paper beside it so that the strokes stand out from any colour, rust too. */
const strokeColour = '#94401f';
const besideColour = 'rgb(252 250 245 / 80%)';
/** From a stroke to the next along the rows, and how thick they are; times the screen's pixel ratio. */
const pitchPx = 8;
const strokePx = 1.5;
const besidePx = 1.1;

/** Fine slanting strokes over what print cannot show, kept until the view or the marks change. */
export class Hatching {
  private readonly layer = new OffscreenCanvas(1, 1);
  private readonly context = this.layer.getContext('2d', { willReadFrequently: true })!;
  private pattern: { ratio: number; tile: CanvasPattern } | null = null;
  private drawnFor = '';

  constructor(private readonly marker: OutsideMarker) {}

  draw(
    onto: OffscreenCanvasRenderingContext2D,
    scene: Scene,
    sheets: readonly PictureSheet[],
    left: readonly PictureSheet[] | null,
  ): void {
    if (scene.hatchRatio === null) return;
    const { stage, view, split01, bare } = scene;
    const all = [...sheets, ...(left ?? [])].map((sheet) => this.marker.versionOf(sheet));
    if (all.every((version) => version === '')) return;
    const regions = [...sheets, ...(left ?? [])].map(({ level, region }) => [level, region]);
    const key = JSON.stringify([stage, view, split01, bare, left?.length, scene.hatchRatio, all, regions]);
    if (key !== this.drawnFor) {
      this.drawLayer(scene, sheets, left);
      this.drawnFor = key;
    }
    onto.drawImage(this.layer, 0, 0);
  }

  private drawLayer(
    scene: Scene,
    sheets: readonly PictureSheet[],
    left: readonly PictureSheet[] | null,
  ): void {
    const { context, layer } = this;
    const { widthPx, heightPx } = scene.stage;
    if (layer.width !== widthPx || layer.height !== heightPx) {
      layer.width = Math.max(1, widthPx);
      layer.height = Math.max(1, heightPx);
    } else context.clearRect(0, 0, widthPx, heightPx);
    for (const { side, isBare, rect } of drawnSides(scene, left !== null)) {
      if (isBare) continue;
      context.save();
      context.beginPath();
      context.rect(rect.xPx, rect.yPx, rect.widthPx, rect.heightPx);
      context.clip();
      for (const sheet of this.seen(scene, side === 'left' ? left! : sheets, rect))
        this.layMarks(scene, sheet);
      context.restore();
    }
    context.save();
    context.globalCompositeOperation = 'source-in';
    // The strokes lie on the picture and move with it.
    const strokes = this.strokesFor(scene.hatchRatio!);
    const { originXPx, originYPx } = scene.view;
    strokes.setTransform(new DOMMatrix().translate(Math.round(originXPx), Math.round(originYPx)));
    context.fillStyle = strokes;
    context.fillRect(0, 0, widthPx, heightPx);
    context.restore();
  }

  /** Without the sheets whose marks lie wholly under a finer one's: to enlarge them takes longest of all. */
  private seen(scene: Scene, sheets: readonly PictureSheet[], side: Rect): readonly PictureSheet[] {
    const left = Math.max(0, side.xPx);
    const top = Math.max(0, side.yPx);
    const right = Math.min(scene.stage.widthPx, side.xPx + side.widthPx);
    const bottom = Math.min(scene.stage.heightPx, side.yPx + side.heightPx);
    const lowest = sheets.findLastIndex((sheet) => {
      const { x, y, width, height } = sheet.place(scene.view);
      const isCovering = x <= left && y <= top && x + width >= right && y + height >= bottom;
      return isCovering && this.marker.canvasOf(sheet) !== null;
    });
    return sheets.slice(Math.max(0, lowest));
  }

  private layMarks(scene: Scene, sheet: PictureSheet): void {
    const marks = this.marker.canvasOf(sheet);
    if (!marks) return;
    const { x, y, width, height, magnification } = sheet.place(scene.view);
    // A finer sheet says better what the coarse one below it said.
    this.context.clearRect(x, y, width, height);
    this.context.imageSmoothingEnabled = magnification < 1;
    this.context.imageSmoothingQuality = 'medium';
    this.context.drawImage(marks, x, y, width, height);
  }

  private strokesFor(ratio: number): CanvasPattern {
    if (this.pattern?.ratio !== ratio)
      this.pattern = { ratio, tile: this.context.createPattern(drawTile(ratio), 'repeat')! };
    return this.pattern.tile;
  }
}

/** A tile whose slanting strokes go on in the next one. */
function drawTile(ratio: number): OffscreenCanvas {
  const side = Math.round(pitchPx * ratio);
  const tile = new OffscreenCanvas(side, side);
  const context = tile.getContext('2d', { willReadFrequently: true })!;
  const strokes: [colour: string, thicknessPx: number, shiftPx: number][] = [
    [besideColour, besidePx, (strokePx + besidePx) / 2],
    [strokeColour, strokePx, 0],
  ];
  for (const [colour, thicknessPx, shiftPx] of strokes) {
    context.strokeStyle = colour;
    context.lineWidth = thicknessPx * ratio;
    // Across the strokes is along both axes at once.
    const along = shiftPx * ratio * Math.SQRT2;
    context.beginPath();
    for (let start = -2 * side; start <= 2 * side; start += side) {
      context.moveTo(start + along - side, 2 * side);
      context.lineTo(start + along + 2 * side, -side);
    }
    context.stroke();
  }
  return tile;
}
