import { basename, dirname, extname, join } from 'node:path';
import { assertWritable } from '../outputPath.ts';
import { refuseForeign } from '../unfinishedFolder.ts';
import type { LayeredPicture } from './layeredPicture.ts';
import { writeOpenRaster } from './openRaster.ts';
import { strataMark, writeStrataFolder } from './strataFolder.ts';

/** An OpenRaster file, or a folder of 16-bit TIFFs. */
export type LayersKind = 'ora' | 'tiff';

const endings: Record<LayersKind, string> = { ora: '.ora', tiff: '.strata' };

/** Where the layers of a picture go: beside it, under its name. */
export function layersBeside(picturePath: string, kind: LayersKind): string {
  return join(dirname(picturePath), `${basename(picturePath, extname(picturePath))}${endings[kind]}`);
}

/** Bits a sample the layers are kept with. */
export function layersDepth(kind: LayersKind, pictureDepth: 8 | 16): 8 | 16 {
  return kind === 'tiff' ? 16 : pictureDepth;
}

/**
 * Finds out before painting whether layers can be written there; the folder they go to is known to take files.
 * @throws FileError
 */
export async function assertLayersWritable(path: string, kind: LayersKind): Promise<void> {
  if (kind === 'ora') await assertWritable(path);
  else await refuseForeign(path, strataMark);
}

/**
 * Writes the layers of a painting, whole or not at all.
 * @throws FileError naming the path; the signal's reason when it is aborted
 */
export async function writeLayers(
  path: string,
  picture: LayeredPicture,
  kind: LayersKind,
  options: { signal?: AbortSignal } = {},
): Promise<void> {
  if (kind === 'ora') await writeOpenRaster(path, picture, options);
  else await writeStrataFolder(path, picture, options);
}
