import type { Metadata, Sharp } from 'sharp';
import { wideProfile } from '../../core/colour/matrixProfile.ts';
import { type ColourPlan, planColours } from './colourPlan.ts';
import { whyUndecodable } from './decodeFaults.ts';
import { withCredits } from './exifBlock.ts';
import { FileError } from './fileError.ts';
import { sharp } from './imageLibrary.ts';
import { unlessAborted } from './interruption.ts';
import { turnUpright } from './orientation.ts';
import { creditsOf } from './photoCredits.ts';
import type { PhotoFile } from './photoFile.ts';
import { openPhoto, type PhotoHeader, readHeader } from './photoHeader.ts';
import { throughProfile } from './throughProfile.ts';
import { readTiffExif } from './tiffExif.ts';

type Strictness = 'warning' | 'truncated';

/**
 * Reads a photo: upright, full resolution, the numbers of the file (8 or 16 bits), straight alpha.
 * The embedded profile comes along unchanged; only what is not RGB is converted, and the remarks say so.
 * @throws FileError naming the file, what is wrong with it and what to do
 * @throws the signal's reason when it is aborted
 */
export async function readPhoto(path: string, options: { signal?: AbortSignal } = {}): Promise<PhotoFile> {
  const { signal } = options;
  signal?.throwIfAborted();
  const opened = await openPhoto(path, { wholeFile: true, signal });
  const header = await readHeader(path, opened, signal);
  const colours = planColours(header.metadata);
  const decoded = await decode({ path, source: opened.source, header, colours }, signal);
  const { through } = colours;
  const converted = through ? await throughProfile(path, decoded, through, signal) : decoded;
  const upright = await turnUpright(converted, header.orientation, signal);
  const facts = await factsOf(path, opened.source, header, colours, decoded.remarks);
  return {
    ...facts,
    widthPx: upright.widthPx,
    heightPx: upright.heightPx,
    channels: converted.channels,
    pixels: upright.pixels,
  };
}

/** What travels on to the painted file. */
export async function factsOf(
  path: string,
  source: Buffer | string,
  header: PhotoHeader,
  colours: ColourPlan,
  remarks: string[],
): Promise<Omit<PhotoFile, 'widthPx' | 'heightPx' | 'channels' | 'pixels'>> {
  const { metadata } = header;
  const exif = header.format === 'tiff' ? await readTiffExif(source) : metadata.exif;
  return {
    path,
    format: header.format,
    depth: colours.through ? 16 : header.depth,
    iccProfile: colours.through ? wideProfile() : colours.iccProfile,
    densityPpi: writtenDensity(metadata),
    exif: withCredits(exif && plainBytes(exif), creditsOf(metadata.xmp, metadata.iptc)),
    remarks: [...colours.remarks, ...remarks, ...pageRemarks(metadata)],
  };
}

function pageRemarks(metadata: Metadata): string[] {
  const pages = metadata.pages ?? 1;
  return pages > 1 ? [`The file holds ${pages} pictures: the first one is used.`] : [];
}

/** The library reports 72 where a file says nothing, so 72 counts as unsaid; nothing is printed at 72. */
function writtenDensity(metadata: Metadata): number | undefined {
  return metadata.density && metadata.density !== 72 ? metadata.density : undefined;
}

/** A photo that is about to be decoded. */
export interface PhotoToDecode {
  path: string;
  source: Buffer | string;
  header: PhotoHeader;
  colours: ColourPlan;
}

function pipeline({ source, header, colours }: PhotoToDecode, failOn: Strictness): Sharp {
  const image = sharp(source, {
    failOn,
    limitInputPixels: false, // The header was held against our own limit.
    ignoreIcc: !colours.convert || colours.through !== undefined,
    sequentialRead: true,
  });
  // The amounts of ink as they are in the file.
  if (colours.through?.space === 'CMYK') return image.pipelineColourspace('cmyk').toColourspace('cmyk');
  // Asking for 16-bit output alone silently gives 8-bit values: the working space must be 16-bit too.
  return header.depth === 16 ? image.toColourspace('rgb16') : image;
}

/**
 * Decodes strictly first. A file that only drew warnings is decoded again without minding them, with a remark;
 * one that is cut off, or breaks the decoder, is refused.
 * @param run lets the library decode to wherever the pixels shall go
 */
export async function decodeWith<T>(
  photo: PhotoToDecode,
  run: (image: Sharp) => Promise<T>,
  signal?: AbortSignal,
): Promise<{ result: T; remarks: string[] }> {
  const attempt = (failOn: Strictness) => unlessAborted(run(pipeline(photo, failOn)), signal);
  try {
    return { result: await attempt('warning'), remarks: [] };
  } catch (strictFailure) {
    signal?.throwIfAborted();
    const fault = whyUndecodable(photo.path, strictFailure);
    try {
      const result = await attempt('truncated');
      return { result, remarks: [`The file ${fault.problem}: parts of the picture may look wrong.`] };
    } catch (failure) {
      signal?.throwIfAborted();
      throw whyUndecodable(photo.path, failure);
    }
  }
}

async function decode(photo: PhotoToDecode, signal?: AbortSignal) {
  const { path, header } = photo;
  const { result, remarks } = await decodeWith(
    photo,
    (image) =>
      (header.depth === 16 ? image.raw({ depth: 'ushort' }) : image.raw()).toBuffer({
        resolveWithObject: true,
      }),
    signal,
  );
  const { data, info } = result;
  const channels = paintableChannels(path, info.channels);
  const pixels = header.depth === 16 ? asSamples16(data) : plainBytes(data);
  if (pixels.length !== info.width * info.height * channels)
    throw new FileError(
      path,
      'decodes to a wrong number of samples',
      'Export it again as RGB and open that.',
    );
  return { pixels, widthPx: info.width, heightPx: info.height, channels, remarks };
}

/** @throws FileError where a photo decodes to anything but RGB, with or without alpha */
export function paintableChannels(path: string, channels: number): 3 | 4 {
  if (channels === 3 || channels === 4) return channels;
  throw new FileError(path, `holds ${channels} channels`, 'Export it as an RGB picture and open that.');
}

/** The same memory without Buffer's own methods, which differ from those of a plain array (`slice`). */
function plainBytes(bytes: Uint8Array): Uint8Array {
  return new Uint8Array(bytes.buffer, bytes.byteOffset, bytes.byteLength);
}

function asSamples16(bytes: Buffer): Uint16Array {
  if (bytes.byteOffset % 2 === 0)
    return new Uint16Array(bytes.buffer, bytes.byteOffset, bytes.byteLength / 2);
  return new Uint16Array(new Uint8Array(bytes).buffer);
}
