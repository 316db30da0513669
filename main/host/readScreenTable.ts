import { createHash } from 'node:crypto';
import { wideProfile } from '../../core/colour/matrixProfile.ts';
import { tableForScreen } from '../colour/colourThread.ts';
import type { ScreenSpace } from '../colour/screenTable.ts';
import { planColours } from '../files/colourPlan.ts';
import { openPhoto, readHeader } from '../files/photoHeader.ts';

/** Photos of one camera have one profile: its table is made once. */
const tables = new Map<string, Promise<Uint16Array | null>>();
const mostTables = 8;

/**
 * The way of a photo's colours to the screen's, found from its header before it is decoded.
 * @returns a table for `throughTable`; null where there is nothing to convert, or the profile cannot be used
 */
export async function readScreenTable(path: string, screen: ScreenSpace): Promise<Uint16Array | null> {
  const shown = await profileOfPainting(path);
  if (!shown) return null;
  const key = `${screen} ${createHash('sha256').update(shown).digest('base64')}`;
  let table = tables.get(key);
  if (!table) {
    // A profile that the colour engine refuses: the numbers are shown as they are.
    table = tableForScreen(shown, screen).catch(() => null);
    tables.set(key, table);
    const [oldest] = tables.keys();
    if (tables.size > mostTables) tables.delete(oldest);
  }
  return table;
}

/** What the numbers of a painted photo mean; undefined where it carries no profile of its own. */
export async function profileOfPainting(path: string): Promise<Uint8Array | undefined> {
  const { format } = await openPhoto(path, { wholeFile: false });
  const header = await readHeader(path, { format, source: path });
  const { through, iccProfile } = planColours(header.metadata);
  return through ? wideProfile() : iccProfile;
}
