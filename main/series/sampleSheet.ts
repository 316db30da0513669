import type { DecodedPhoto } from '../../core/pixels/photo.ts';

/** Windows along each edge of the photo. */
const windowsAcross = 6;
/** Side of a window, and what is painted around it but not looked at, as shares of the long edge. */
const windowShare = 0.045;
const marginShare = 0.006;
const leastMarginPx = 8;

/** Windows of a photo at full resolution, set side by side in one picture. */
export interface SampleSheet {
  readonly sheet: DecodedPhoto;
  /** Where each window lies in the sheet, without its margin. */
  readonly windows: readonly { xPx: number; yPx: number; widthPx: number; heightPx: number }[];
}

/**
 * Cuts nine windows, evenly spread, out of a photo: about an eighth of it with their margins. Painted, they show
 * what the whole will be like at full resolution, for an eighth of the time.
 * @param photo not modified
 */
export function cutSampleSheet(photo: DecodedPhoto): SampleSheet {
  const longEdgePx = Math.max(photo.widthPx, photo.heightPx);
  const marginPx = Math.max(leastMarginPx, Math.round(longEdgePx * marginShare));
  const side = (edgePx: number) => Math.min(edgePx, Math.max(24, Math.round(longEdgePx * windowShare)));
  const [widthPx, heightPx] = [side(photo.widthPx), side(photo.heightPx)];
  const cellWidth = widthPx + 2 * marginPx;
  const cellHeight = heightPx + 2 * marginPx;
  const sheetWidth = cellWidth * windowsAcross;
  const { channels } = photo;
  const Samples = photo.pixels.BYTES_PER_ELEMENT === 1 ? Uint8Array : Uint16Array;
  const pixels = new Samples(sheetWidth * cellHeight * windowsAcross * 3);
  const windows: SampleSheet['windows'][number][] = [];
  for (let row = 0; row < windowsAcross; row++)
    for (let column = 0; column < windowsAcross; column++) {
      const left = Math.round(((column + 0.5) / windowsAcross) * photo.widthPx - cellWidth / 2);
      const top = Math.round(((row + 0.5) / windowsAcross) * photo.heightPx - cellHeight / 2);
      for (let y = 0; y < cellHeight; y++) {
        const fromRow = clamp(top + y, photo.heightPx) * photo.widthPx;
        let to = ((row * cellHeight + y) * sheetWidth + column * cellWidth) * 3;
        for (let x = 0; x < cellWidth; x++, to += 3) {
          const from = (fromRow + clamp(left + x, photo.widthPx)) * channels;
          pixels[to] = photo.pixels[from];
          pixels[to + 1] = photo.pixels[from + 1];
          pixels[to + 2] = photo.pixels[from + 2];
        }
      }
      windows.push({
        xPx: column * cellWidth + marginPx,
        yPx: row * cellHeight + marginPx,
        widthPx,
        heightPx,
      });
    }
  const sheet: DecodedPhoto = {
    widthPx: sheetWidth,
    heightPx: cellHeight * windowsAcross,
    channels: 3,
    pixels,
  };
  return { sheet, windows };
}

function clamp(at: number, edgePx: number): number {
  return Math.max(0, Math.min(edgePx - 1, at));
}
