import { markOutside } from '../../core/colour/gamutMarks.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import { compositionKey, type PictureSheet } from './pictureSheet.ts';
import { shareInside } from './shareInside.ts';

/** A hand that rests this long has finished a change. */
const restMs = 300;
/** Pixels marked in one go, some milliseconds' worth: frames are drawn in between. */
const pixelsAtOnce = 100_000;

/** A sheet to be marked, composed with these values. */
export interface MarkedSheet {
  sheet: PictureSheet;
  parameters: Parameters;
}

interface SheetMarks {
  key: string;
  /** One number a pixel of the sheet: 1 where print cannot show the colour. */
  marks: Uint8Array;
  /** The same, opaque and clear. */
  canvas: OffscreenCanvas;
  /** Of the part that was last asked for. */
  share: { of: string; share01: number } | null;
}

/**
 * Finds what a print cannot show of the composed picture, some time after it has come to rest, a few rows at a time.
 * Marks stay as they are until others take their place, and go with their sheet.
 */
export class OutsideMarker {
  private table: Uint16Array | null = null;
  private tableNumber = 0;
  private readonly found = new Map<PictureSheet, SheetMarks>();
  private awaited: { sheet: PictureSheet; key: string }[] = [];
  private timer: ReturnType<typeof setTimeout> | undefined;

  /** @param onMarked called when there is something new to draw */
  constructor(private readonly onMarked: () => void) {}

  /** @param table of the print's profile; null where nothing is marked */
  setTable(table: Uint16Array | null): void {
    this.table = table;
    this.tableNumber += 1;
    this.stop();
    // What another paper cannot hold says nothing of this one.
    for (const sheet of this.found.keys()) this.forget(sheet);
  }

  /** Called at each drawing: what is not marked as it is drawn will be, once this stays so for a while. */
  consider(drawn: readonly MarkedSheet[]): void {
    if (!this.table) return;
    const stale = drawn.filter((one) => this.found.get(one.sheet)?.key !== this.keyOf(one));
    const next = stale.map((one) => ({ sheet: one.sheet, key: this.keyOf(one) }));
    const isSame =
      next.length === this.awaited.length &&
      next.every(({ sheet, key }, i) => sheet === this.awaited[i].sheet && key === this.awaited[i].key);
    if (isSame) return;
    this.stop();
    this.awaited = next;
    if (next.length > 0) this.timer = setTimeout(() => void this.mark(stale, next), restMs);
  }

  /** The sheet's marks, perhaps not yet of the newest strengths; null before there are any. */
  canvasOf(sheet: PictureSheet): OffscreenCanvas | null {
    return this.found.get(sheet)?.canvas ?? null;
  }

  /** What has been found of a sheet, as a number that changes whenever it does. */
  versionOf(sheet: PictureSheet): string {
    return this.found.get(sheet)?.key ?? '';
  }

  /**
   * The share of a part of the photo that is marked.
   * @param part in pixels of the photo
   * @returns null while it is not known for these strengths
   */
  shareOf({ sheet, parameters }: MarkedSheet, part: Rect): number | null {
    const marked = this.found.get(sheet);
    if (!marked || marked.key !== this.keyOf({ sheet, parameters })) return null;
    const of = JSON.stringify(part);
    if (marked.share?.of !== of)
      marked.share = { of, share01: shareInside(marked.marks, sheet.region, sheet.level, part) };
    return marked.share.share01;
  }

  /** A sheet is put away. */
  forget(sheet: PictureSheet): void {
    const marked = this.found.get(sheet);
    // The canvas's memory goes back at once; the collector knows nothing of its size.
    if (marked) marked.canvas.width = 0;
    this.found.delete(sheet);
  }

  private keyOf({ parameters }: MarkedSheet): string {
    return `${this.tableNumber} ${compositionKey(parameters)}`;
  }

  private stop(): void {
    clearTimeout(this.timer);
    this.awaited = [];
  }

  private async mark(sheets: readonly MarkedSheet[], asked: OutsideMarker['awaited']): Promise<void> {
    for (const [i, { sheet, parameters }] of sheets.entries()) {
      const marks = await this.marksOf(sheet, parameters, () => this.awaited === asked);
      if (!marks) return;
      this.forget(sheet);
      const canvas = inked(marks, sheet.region);
      this.found.set(sheet, { key: asked[i].key, marks, canvas, share: null });
    }
    this.awaited = [];
    this.onMarked();
  }

  /** @returns null where nobody wants it any longer */
  private async marksOf(
    sheet: PictureSheet,
    parameters: Parameters,
    isWanted: () => boolean,
  ): Promise<Uint8Array | null> {
    const rgba = sheet.held.composeOwn(parameters);
    const count = rgba.length / 4;
    const marks = new Uint8Array(count);
    for (let first = 0; first < count; first += pixelsAtOnce) {
      const end = Math.min(count, first + pixelsAtOnce);
      markOutside(rgba.subarray(first * 4, end * 4), this.table!, marks.subarray(first, end));
      await new Promise((resolve) => setTimeout(resolve, 0));
      if (!isWanted()) return null;
    }
    return marks;
  }
}

function inked(marks: Uint8Array, { widthPx, heightPx }: Rect): OffscreenCanvas {
  const canvas = new OffscreenCanvas(widthPx, heightPx);
  const pixels = new ImageData(widthPx, heightPx);
  const words = new Uint32Array(pixels.data.buffer);
  for (let i = 0; i < marks.length; i++) if (marks[i]) words[i] = 0xff_00_00_00;
  canvas.getContext('2d', { willReadFrequently: true })!.putImageData(pixels, 0, 0);
  return canvas;
}
