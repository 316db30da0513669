import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import sharp from 'sharp';
import type { Parameters } from '../../core/parameters/table.ts';
import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import type { Engine } from '../../main/engine/engineApi.ts';
import type { LayeredPicture } from '../../main/files/layers/layeredPicture.ts';
import { LayerStore } from '../../main/files/layers/layerStore.ts';
import { laidOver, type Pixel } from '../oracles/compositing.ts';
import { readZip, type ZipEntry } from './zipReader.ts';

/** Paints a photo and takes it apart; discard the store in the end. */
export async function takenApart(
  engine: Engine,
  photo: DecodedPhoto,
  parameters: Parameters,
  { depth, layersDepth = depth, inFiles = false }: { depth: 8 | 16; layersDepth?: 8 | 16; inFiles?: boolean },
): Promise<{ picture: LayeredPicture; store: LayerStore }> {
  const { widthPx, heightPx, channels } = photo;
  const store = await LayerStore.begin(photo, parameters, { depth: layersDepth, inFiles });
  const held = await engine.open(photo);
  const samples = widthPx * heightPx * channels;
  const pixels = depth === 8 ? new Uint8Array(samples) : new Uint16Array(samples);
  try {
    const options = { depth, bandRows: 32, withStrata: true };
    await engine.paintBands(
      held,
      parameters,
      async (band) => {
        pixels.set(band.pixels, band.topRow * widthPx * channels);
        await store.append(band.strata!);
      },
      options,
    );
    const layers = await store.finish();
    return { picture: { widthPx, heightPx, layers, composed: { channels, pixels }, parameters }, store };
  } finally {
    held.close();
  }
}

/** A picture as pixels of 0…1. */
export interface UnitPicture {
  widthPx: number;
  heightPx: number;
  depth: string | undefined;
  channels: number;
  pixel(at: number): Pixel;
}

/** Decodes a PNG or TIFF with the image library, numbers as they are. */
export async function decoded(file: Buffer | string): Promise<UnitPicture> {
  const { depth } = await sharp(file).metadata();
  const image = sharp(file, { ignoreIcc: true });
  const plain = depth === 'ushort' ? image.toColourspace('rgb16').raw({ depth: 'ushort' }) : image.raw();
  const { data, info } = await plain.toBuffer({ resolveWithObject: true });
  const samples =
    depth === 'ushort' ? new Uint16Array(data.buffer, data.byteOffset, data.byteLength / 2) : data;
  const top = depth === 'ushort' ? 65535 : 255;
  const { channels } = info;
  const pixel = (at: number): Pixel => {
    const value = (k: number) => samples[at * channels + k] / top;
    return [value(0), value(1), value(2), channels === 4 ? value(3) : 1];
  };
  return { widthPx: info.width, heightPx: info.height, depth, channels, pixel };
}

export interface ReadLayer {
  name: string;
  opacity01: number;
  /** As in test/oracles/compositing. */
  operator: string;
  picture: UnitPicture;
}

/** Layers from the bottom up, laid over nothing. */
export function flattened(layers: readonly ReadLayer[], at: number): Pixel {
  let result: Pixel = [0, 0, 0, 0];
  for (const { picture, opacity01, operator } of layers) {
    const [red, green, blue, alpha] = picture.pixel(at);
    result = laidOver(result, [red, green, blue, alpha * opacity01], operator);
  }
  return result;
}

/** The largest difference of any channel; colour does not count where nothing is to be seen. */
export function largestDifference(layers: readonly ReadLayer[], composed: UnitPicture): number {
  let largest = 0;
  for (let at = 0; at < composed.widthPx * composed.heightPx; at++) {
    const flat = flattened(layers, at);
    const ours = composed.pixel(at);
    const isSeen = flat[3] > 0 && ours[3] > 0;
    for (let k = isSeen ? 0 : 3; k < 4; k++) largest = Math.max(largest, Math.abs(flat[k] - ours[k]));
  }
  return largest;
}

export interface ReadOpenRaster {
  entries: ZipEntry[];
  image: Record<string, string>;
  /** From the bottom up. */
  layers: (ReadLayer & { attributes: Record<string, string>; bytes: Buffer })[];
  merged: UnitPicture;
}

/** Reads an OpenRaster file by its specification. */
export async function readOpenRaster(path: string): Promise<ReadOpenRaster> {
  const entries = readZip(await readFile(path));
  const bytesOf = (name: string) => entries.find((entry) => entry.name === name)!.bytes;
  const xml = bytesOf('stack.xml').toString('utf8');
  const tags = [...xml.matchAll(/<(image|layer)\s([^>]*?)\/?>/g)].map(([, tag, text]) => ({
    tag,
    attributes: Object.fromEntries(
      [...text.matchAll(/([\w-]+)="([^"]*)"/g)].map(([, key, value]) => [key, value]),
    ),
  }));
  const layers = tags
    .filter(({ tag }) => tag === 'layer')
    .reverse()
    .map(async ({ attributes }) => ({
      attributes,
      name: attributes.name,
      opacity01: Number(attributes.opacity),
      operator: attributes['composite-op'].replace(/^svg:/, ''),
      bytes: bytesOf(attributes.src),
      picture: await decoded(bytesOf(attributes.src)),
    }));
  return {
    entries,
    image: tags.find(({ tag }) => tag === 'image')!.attributes,
    layers: await Promise.all(layers),
    merged: await decoded(bytesOf('mergedimage.png')),
  };
}

/** Reads a folder of strata by its list. */
export async function readStrataFolder(path: string) {
  const list = JSON.parse(await readFile(join(path, 'strata.json'), 'utf8'));
  const operators: Record<string, string> = { normal: 'src-over', 'destination-out': 'dst-out' };
  const layers: ReadLayer[] = await Promise.all(
    list.strata.map(async (stratum: { name: string; file: string; strength: number; mode: string }) => ({
      name: stratum.name,
      opacity01: stratum.strength,
      operator: operators[stratum.mode] ?? stratum.mode,
      picture: await decoded(join(path, stratum.file)),
    })),
  );
  return { list, layers, composed: await decoded(join(path, list.composed)) };
}
