import type { Sharp } from 'sharp';
import { planColours } from '../files/colourPlan.ts';
import { whyUndecodable } from '../files/decodeFaults.ts';
import { sharp } from '../files/imageLibrary.ts';
import { unlessAborted } from '../files/interruption.ts';
import { swapsEdges } from '../files/orientation.ts';
import { openPhoto, readHeader } from '../files/photoHeader.ts';
import { pngWithParts } from '../files/pngParts.ts';
import { decodeWith } from '../files/readPhoto.ts';
import type { ProofPicture, ProofPixels } from './proofSource.ts';

/** What a file's header says of a picture. */
export interface ProofPictureFacts {
  widthPx: number;
  heightPx: number;
  ppi?: number;
}

/** What the library reports where a file says nothing. */
const unsaidPpi = 72;
const jpegQuality = 92;

/**
 * Size of a picture, upright, and its resolution where it tells one.
 * @throws FileError
 */
export async function readProofFacts(
  picture: ProofPicture,
  signal?: AbortSignal,
): Promise<ProofPictureFacts> {
  if ('paint' in picture) return { widthPx: picture.widthPx, heightPx: picture.heightPx };
  const { path } = picture;
  const { format } = await openPhoto(path, { wholeFile: false, signal });
  const header = await readHeader(path, { format, source: path }, signal);
  const { storedWidthPx, storedHeightPx, orientation, metadata } = header;
  const turned = swapsEdges(orientation);
  const ppi = metadata.density && metadata.density !== unsaidPpi ? metadata.density : undefined;
  return turned
    ? { widthPx: storedHeightPx, heightPx: storedWidthPx, ppi }
    : { widthPx: storedWidthPx, heightPx: storedHeightPx, ppi };
}

/** What a sheet holds of a picture: sRGB, on white where it is transparent. */
export interface ProofPixelSize {
  widthPx: number;
  heightPx: number;
}

/**
 * Reads or paints a picture at the size it is printed at, as a JPEG in sRGB.
 * @throws FileError
 */
export async function proofJpeg(
  picture: ProofPicture,
  size: ProofPixelSize,
  signal?: AbortSignal,
): Promise<Buffer> {
  return reduced(picture, size, signal, (image) =>
    image.jpeg({ quality: jpegQuality, chromaSubsampling: '4:4:4' }).toBuffer(),
  );
}

/** The same as plain R, G, B of 8 bits. */
export async function proofRgb(
  picture: ProofPicture,
  size: ProofPixelSize,
  signal?: AbortSignal,
): Promise<Buffer> {
  return reduced(picture, size, signal, (image) => image.raw().toBuffer());
}

async function reduced(
  picture: ProofPicture,
  size: ProofPixelSize,
  signal: AbortSignal | undefined,
  finish: (image: Sharp) => Promise<Buffer>,
): Promise<Buffer> {
  const print = (image: Sharp) =>
    finish(
      image
        .autoOrient()
        .resize(size.widthPx, size.heightPx, { fit: 'fill', kernel: 'lanczos3' })
        .flatten({ background: '#ffffff' })
        .toColourspace('srgb')
        // Asked for by name: of 16-bit samples the library gives the numbers of a wider space else.
        .withIccProfile('srgb'),
    );
  if ('paint' in picture) {
    const painted = await picture.paint(size, signal);
    const file = await asFile(painted);
    return unlessAborted(print(sharp(file, { limitInputPixels: false })), signal);
  }
  const { path } = picture;
  const opened = await openPhoto(path, { wholeFile: true, signal });
  const header = await readHeader(path, opened, signal);
  const colours = planColours(header.metadata);
  // Numbers are kept when a photo is painted; a sheet is for looking, so here its profile is always followed.
  const { iccProfile, through, remarks } = colours;
  const convert = colours.convert || iccProfile !== undefined || through !== undefined;
  const source = { path, source: opened.source, header, colours: { convert, remarks } };
  try {
    return (await decodeWith(source, print, signal)).result;
  } catch (failure) {
    signal?.throwIfAborted();
    throw failure instanceof Error && 'remedy' in failure ? failure : whyUndecodable(path, failure);
  }
}

/** Pixels with their profile, in a form the library takes both from. */
async function asFile({ widthPx, heightPx, channels, pixels, iccProfile }: ProofPixels): Promise<Buffer> {
  const raw = sharp(pixels, { raw: { width: widthPx, height: heightPx, channels }, limitInputPixels: false });
  const image = pixels instanceof Uint16Array ? raw.toColourspace('rgb16') : raw;
  const png = await image.png({ compressionLevel: 1 }).toBuffer();
  return Buffer.concat(pngWithParts(png, { iccProfile }));
}
