import { Readable } from 'node:stream';
import yazl from 'yazl';
import type { LayerMode } from '../../../core/composition/layerStack.ts';
import { encodePicture } from '../encodePicture.ts';
import type { AnyPictureFile } from '../photoFile.ts';
import { fileErrorFrom } from '../systemErrors.ts';
import { UnfinishedFile } from '../unfinishedFile.ts';
import type { LayeredPicture } from './layeredPicture.ts';
import type { FilledLayer } from './layerStore.ts';
import { thumbnailPng } from './thumbnail.ts';

// OpenRaster, baseline: file layout and layer stack specification, version 0.0.5.

const specification = '0.0.5';
const mimeType = 'image/openraster';
const defaultPpi = 72;

const compositeOps: Record<LayerMode, string> = {
  normal: 'svg:src-over',
  multiply: 'svg:multiply',
  screen: 'svg:screen',
  overlay: 'svg:overlay',
  darken: 'svg:darken',
  lighten: 'svg:lighten',
  'colour-burn': 'svg:color-burn',
  'hard-light': 'svg:hard-light',
  'soft-light': 'svg:soft-light',
  'cut-out': 'svg:dst-out',
};

/**
 * Writes a painting as an OpenRaster file, whole or not at all. One layer is packed at a time.
 * @throws FileError naming the file; the signal's reason when it is aborted
 */
export async function writeOpenRaster(
  path: string,
  picture: LayeredPicture,
  options: { signal?: AbortSignal } = {},
): Promise<void> {
  const { signal } = options;
  signal?.throwIfAborted();
  const thumbnail = await thumbnailPng(picture, signal);
  const file = await UnfinishedFile.begin(path);
  try {
    const zip = new yazl.ZipFile();
    const stored = { compress: false, forceDosTimestamp: true };
    // First, neither packed nor with anything between its name and its bytes: the type is found at a fixed place.
    zip.addBuffer(Buffer.from(mimeType, 'latin1'), 'mimetype', stored);
    zip.addBuffer(Buffer.from(stackXml(picture), 'utf8'), 'stack.xml');
    zip.addBuffer(Buffer.from(thumbnail), 'Thumbnails/thumbnail.png', stored);
    const add = (name: string, layer: Pick<AnyPictureFile, 'channels' | 'pixels'>) =>
      zip.addReadStreamLazy(name, stored, (take) => {
        const { widthPx, heightPx } = picture;
        const png: AnyPictureFile = { widthPx, heightPx, ...layer, format: 'png' };
        take(null, inStepWith(zip, pngPieces(path, png, picture, signal)));
      });
    for (const layer of picture.layers) add(layerFile(layer), layer);
    add('mergedimage.png', picture.composed);
    zip.end();
    await takeAll(zip, file, signal);
    await file.finish();
  } catch (failure) {
    signal?.throwIfAborted();
    throw fileErrorFrom(path, failure);
  } finally {
    file.discard();
  }
}

/** A stream that ends with the zip, and the zip with it: of itself the zip sees no failure of what it reads. */
function inStepWith(zip: yazl.ZipFile, pieces: AsyncGenerator<Uint8Array>): Readable {
  const output = zip.outputStream as Readable;
  const source = Readable.from(pieces, { objectMode: false });
  source.on('error', (failure) => output.destroy(failure));
  output.once('close', () => source.destroy());
  return source;
}

async function takeAll(zip: yazl.ZipFile, file: UnfinishedFile, signal?: AbortSignal): Promise<void> {
  const output = zip.outputStream as Readable;
  zip.on('error', (failure) => output.destroy(failure));
  for await (const piece of output) await file.append(piece as Uint8Array, signal);
}

const readBytes = 4 * 2 ** 20;

async function* pngPieces(
  path: string,
  png: AnyPictureFile,
  { iccProfile, densityPpi }: LayeredPicture,
  signal?: AbortSignal,
): AsyncGenerator<Uint8Array> {
  const { pieces, rest, restAt } = await encodePicture(png, { iccProfile, densityPpi }, path, signal);
  try {
    for (const piece of pieces)
      for (let at = 0; at < piece.length; at += readBytes) yield piece.subarray(at, at + readBytes);
    if (!rest) return;
    const end = rest.bytes;
    for (let at = restAt; at < end; at += readBytes) {
      const piece = new Uint8Array(Math.min(readBytes, end - at));
      await rest.read(piece, at, signal);
      yield piece;
    }
  } finally {
    rest?.discard();
  }
}

function layerFile({ content }: FilledLayer): string {
  return `data/${content}.png`;
}

/** The stack, as the specification has it: the topmost layer first. */
function stackXml({ widthPx, heightPx, layers, densityPpi = defaultPpi }: LayeredPicture): string {
  const ppi = Math.round(densityPpi);
  const lines = [...layers].reverse().map((layer) => {
    const { name, opacity01, mode } = layer;
    return (
      `    <layer name="${name}" src="${layerFile(layer)}" x="0" y="0" opacity="${opacity01}" ` +
      `visibility="visible" composite-op="${compositeOps[mode]}"/>\n`
    );
  });
  return (
    `<?xml version="1.0" encoding="UTF-8"?>\n` +
    `<image version="${specification}" w="${widthPx}" h="${heightPx}" xres="${ppi}" yres="${ppi}">\n` +
    `  <stack>\n${lines.join('')}  </stack>\n</image>\n`
  );
}
