import { Turns } from './interruption.ts';
import { type PixelHolder, samplesOf } from './pictureRows.ts';

/** Whether no pixel of a picture is transparent. */
export async function isOpaque(picture: PixelHolder, signal?: AbortSignal): Promise<boolean> {
  if (picture.channels === 3) return true;
  const samplesATurn = 4 * 2 ** 20;
  const rows = Math.max(1, Math.floor(samplesATurn / (picture.widthPx * 4)));
  const turns = new Turns(signal);
  for (let top = 0; top < picture.heightPx; top += rows) {
    const samples = await samplesOf(picture, top, Math.min(top + rows, picture.heightPx), signal);
    const full = samples.BYTES_PER_ELEMENT === 2 ? 65535 : 255;
    for (let i = 3; i < samples.length; i += 4) if (samples[i] !== full) return false;
    if (turns.due) await turns.pause();
  }
  return true;
}
