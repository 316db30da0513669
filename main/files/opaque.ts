import { Turns } from './interruption.ts';

/** Whether no pixel of a picture is transparent. */
export async function isOpaque(
  picture: { channels: 3 | 4; pixels: Uint8Array | Uint16Array },
  signal?: AbortSignal,
): Promise<boolean> {
  if (picture.channels === 3) return true;
  const { pixels } = picture;
  const full = pixels.BYTES_PER_ELEMENT === 2 ? 65535 : 255;
  const samplesATurn = 4 * 2 ** 20;
  const turns = new Turns(signal);
  for (let start = 0; start < pixels.length; start += samplesATurn) {
    const end = Math.min(start + samplesATurn, pixels.length);
    for (let i = start + 3; i < end; i += 4) if (pixels[i] !== full) return false;
    if (turns.due) await turns.pause();
  }
  return true;
}
