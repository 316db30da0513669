import type { Parameters } from '../../../core/parameters/table.ts';
import { UnfinishedFile } from '../unfinishedFile.ts';
import { UnfinishedFolder } from '../unfinishedFolder.ts';
import { writePicture } from '../writePicture.ts';
import type { LayeredPicture } from './layeredPicture.ts';

const format = 'oxgall-strata';
const schema = 1;
const listName = 'strata.json';

/** What a folder of ours begins its list with; only such a one is ever replaced. */
export const strataMark = { file: listName, begins: `{\n  "format": "${format}"` };

/**
 * Writes a painting as a folder of TIFFs, one a layer, with a list that says how they lie on one another; whole or
 * not at all, in the place of an earlier folder of the same kind.
 * @throws FileError naming the folder; the signal's reason when it is aborted
 */
export async function writeStrataFolder(
  path: string,
  picture: LayeredPicture,
  options: { signal?: AbortSignal } = {},
): Promise<void> {
  const { signal } = options;
  const { widthPx, heightPx, iccProfile, densityPpi, layers, composed } = picture;
  signal?.throwIfAborted();
  const folder = UnfinishedFolder.begin(path);
  const facts = { widthPx, heightPx, format: 'tiff', iccProfile, densityPpi } as const;
  try {
    for (const { content, channels, pixels } of layers)
      await writePicture(folder.path(`${content}.tif`), { ...facts, channels, pixels }, { signal });
    await writePicture(folder.path('composed.tif'), { ...facts, ...composed }, { signal });
    await writeText(folder.path(listName), `${JSON.stringify(listOf(picture), null, 2)}\n`);
    signal?.throwIfAborted();
    await folder.finish(strataMark);
  } finally {
    folder.discard();
  }
}

interface StrataList {
  format: typeof format;
  schema: typeof schema;
  widthPx: number;
  heightPx: number;
  ppi: number | null;
  composed: string;
  /** From the bottom up. */
  strata: {
    name: string;
    file: string;
    /** 0…1. */
    strength: number;
    /** Names of W3C Compositing and Blending: blend modes, and `destination-out` for what is cut out. */
    mode: string;
  }[];
  parameters: Parameters;
}

function listOf({ widthPx, heightPx, densityPpi, layers, parameters }: LayeredPicture): StrataList {
  const modeNames: Record<string, string> = { 'colour-burn': 'color-burn', 'cut-out': 'destination-out' };
  return {
    format,
    schema,
    widthPx,
    heightPx,
    ppi: densityPpi ?? null,
    composed: 'composed.tif',
    strata: layers.map(({ name, content, opacity01, mode }) => ({
      name,
      file: `${content}.tif`,
      strength: opacity01,
      mode: modeNames[mode] ?? mode,
    })),
    parameters,
  };
}

async function writeText(path: string, text: string): Promise<void> {
  const file = await UnfinishedFile.begin(path);
  try {
    await file.append(Buffer.from(text, 'utf8'));
    await file.finish();
  } finally {
    file.discard();
  }
}
