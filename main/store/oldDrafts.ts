import { createHash } from 'node:crypto';
import { readFile, rm } from 'node:fs/promises';
import { join } from 'node:path';
import { z } from 'zod';

/*
 * Before there were recipes, unsaved changes were kept as drafts, one small file for each photo in the data folder.
 * They are taken in when the photo is opened, and are gone once its recipe holds them.
 */

const fileSchema = z.object({
  format: z.literal('oxgall-draft'),
  schema: z.literal(1),
  draft: z.object({ parameters: z.record(z.string(), z.unknown()), presetName: z.string().nullable() }),
});

/** The unsaved changes of a photo; the values are those of their day and may not be usable any more. */
export interface OldDraft {
  presetName: string | null;
  parameters: Record<string, unknown>;
}

/** @returns null where there is none that can be read */
export async function readOldDraft(dataFolder: string, photoPath: string): Promise<OldDraft | null> {
  try {
    const text = await readFile(draftPath(dataFolder, photoPath), 'utf8');
    return fileSchema.parse(JSON.parse(text)).draft;
  } catch {
    return null;
  }
}

/** Removes a draft; one that is not there is no fault. */
export async function dropOldDraft(dataFolder: string, photoPath: string): Promise<void> {
  await rm(draftPath(dataFolder, photoPath), { force: true }).catch(() => {});
}

function draftPath(dataFolder: string, photoPath: string): string {
  return join(dataFolder, 'drafts', `${createHash('sha256').update(photoPath).digest('hex')}.json`);
}
