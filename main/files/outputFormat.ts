import { extname } from 'node:path';
import { FileError } from './fileError.ts';
import { isOpaque } from './opaque.ts';
import type { OutputFormat } from './photoFile.ts';
import type { PixelHolder } from './pictureRows.ts';

const formatOfExtension: Record<string, OutputFormat> = {
  '.jpg': 'jpeg',
  '.jpeg': 'jpeg',
  '.png': 'png',
  '.tif': 'tiff',
  '.tiff': 'tiff',
  '.webp': 'webp',
};

/** The usual extension of each format. */
export const extensionOf: Record<OutputFormat, string> = {
  jpeg: '.jpg',
  png: '.png',
  tiff: '.tif',
  webp: '.webp',
};

const nameOf: Record<OutputFormat, string> = { jpeg: 'JPEG', png: 'PNG', tiff: 'TIFF', webp: 'WebP' };

/** The longest edge a format can store. */
const longestEdgePx: Record<OutputFormat, number> = {
  jpeg: 65_535,
  png: 2 ** 31 - 1,
  tiff: 2 ** 31 - 1,
  webp: 16_383,
};

/** @throws FileError with the list of extensions where the name has none of them */
export function outputFormatFor(path: string): OutputFormat {
  const extension = extname(path);
  const format = formatOfExtension[extension.toLowerCase()];
  if (format) return format;
  throw new FileError(
    path,
    extension
      ? `"${extension}" is not a format written here`
      : 'the name has no extension to tell the format',
    `Use one of ${Object.keys(formatOfExtension).join(', ')}.`,
  );
}

/** The bits a channel to paint at, so that the file holds what was painted. */
export function outputDepth(format: OutputFormat, wanted: 8 | 16): 8 | 16 {
  return format === 'png' || format === 'tiff' ? wanted : 8;
}

/**
 * Refuses a picture that a format cannot hold. Worth asking before painting: the painting has the photo's size
 * and alpha.
 * @throws FileError
 */
export async function assertFormatHolds(
  path: string,
  picture: PixelHolder & { space?: 'RGB' | 'CMYK' },
  signal?: AbortSignal,
  format: OutputFormat = outputFormatFor(path),
): Promise<void> {
  assertSizeFits(path, picture, format);
  if (format === 'jpeg' && picture.space !== 'CMYK' && !(await isOpaque(picture, signal)))
    throw new FileError(
      path,
      'the picture is partly transparent, which JPEG cannot hold',
      'Choose PNG, TIFF or WebP.',
    );
}

/** @throws FileError where a format does not hold so many pixels an edge */
export function assertSizeFits(
  path: string,
  { widthPx, heightPx }: { widthPx: number; heightPx: number },
  format: OutputFormat,
): void {
  const edgePx = Math.max(widthPx, heightPx);
  if (edgePx > longestEdgePx[format])
    throw new FileError(
      path,
      `${nameOf[format]} holds at most ${longestEdgePx[format]} pixels an edge, this picture has ${edgePx}`,
      'Choose TIFF or PNG.',
    );
}
