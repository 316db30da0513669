import { endianness } from 'node:os';
import { FileError } from './fileError.ts';
import { paintableChannels } from './readPhoto.ts';
import { SpilledPixels } from './spilledPixels.ts';
import type { SpillFile } from './spillFile.ts';

/** Header of the image library's uncompressed format, in the machine's byte order. */
const headerBytes = 64;
const magic = 0x08f2a6b6;
const formatOfBytes = { 1: 0, 2: 2 } as const;

/**
 * The pixels that the image library wrote to a file ending in `.v`.
 * @param path the photo's, for what goes wrong
 * @throws FileError where they are not what was asked for
 */
export async function uncompressedPixels(path: string, file: SpillFile): Promise<SpilledPixels> {
  const bytes = new Uint8Array(headerBytes);
  await file.read(bytes, 0);
  const view = new DataView(bytes.buffer);
  const isLittle = endianness() === 'LE';
  const int = (at: number) => view.getInt32(at, isLittle);
  const [widthPx, heightPx, format] = [int(4), int(8), int(20)];
  const channels = paintableChannels(path, int(12));
  const bytesPerSample = format === formatOfBytes[2] ? 2 : 1;
  const isSound = view.getUint32(0, false) === magic || view.getUint32(0, true) === magic;
  const isKnown = format === formatOfBytes[bytesPerSample];
  const pixels = new SpilledPixels(file, { widthPx, heightPx, channels, bytesPerSample }, headerBytes);
  if (!isSound || !isKnown || file.bytes < headerBytes + widthPx * heightPx * pixels.pixelBytes)
    throw new FileError(path, 'could not be unpacked', 'Export it again as RGB and open that.');
  return pixels;
}
