import { readdirSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import type { DemoSeries } from './api/hostCommands.ts';
import type { HostParts } from './hostParts.ts';
import { isPhotoName } from './listFolder.ts';

const title = 'The Ferry at Low Water';

/** The bundle lies in dist/main or dist/main/chunks, the source in main/host: each has its own way to dist/demo. */
const waysToDemo = ['../demo', '../../demo', '../../dist/demo'];

/**
 * The demo series, where its plates have been rendered.
 * @param folder where to look; beside the bundle, or where `OXGALL_DEMO` says, unless given
 */
export function findDemo(folder: string | undefined = process.env.OXGALL_DEMO): HostParts['demo'] {
  const folders = folder ? [folder] : waysToDemo.map((way) => fileURLToPath(new URL(way, import.meta.url)));
  for (const candidate of folders) {
    const names = photoNamesIn(candidate);
    if (names.length === 0) continue;
    const photos = names.map((name) => ({ name, path: join(candidate, name) }));
    return { title, prepare: async (): Promise<DemoSeries> => ({ title, folder: candidate, photos }) };
  }
  return null;
}

function photoNamesIn(folder: string): string[] {
  try {
    return readdirSync(folder).filter(isPhotoName).sort();
  } catch {
    return [];
  }
}
