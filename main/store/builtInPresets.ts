import { existsSync } from 'node:fs';
import { readdir, readFile } from 'node:fs/promises';
import { basename, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { type BuiltInPreset, readBuiltInPreset } from '../../core/presets/builtInPreset.ts';
import { FileError } from '../files/fileError.ts';

const reinstall = 'Install Oxgall again, or correct the file.';

/**
 * Reads the presets that ship with the app, in the order of their names.
 * @param folder where they lie; found beside the bundle unless given
 * @throws FileError naming the first file that is no preset
 */
export async function loadBuiltInPresets(folder: string = builtInFolder()): Promise<BuiltInPreset[]> {
  const names = (await readdir(folder)).filter((name) => name.endsWith('.json')).sort();
  return Promise.all(names.map((name) => readOne(join(folder, name))));
}

async function readOne(path: string): Promise<BuiltInPreset> {
  try {
    return readBuiltInPreset(basename(path, '.json'), JSON.parse(await readFile(path, 'utf8')));
  } catch (cause) {
    const problem = cause instanceof Error ? cause.message : String(cause);
    throw new FileError(path, `this is no usable preset: ${problem}`, reinstall, { cause });
  }
}

/** The bundle lies in dist/main or dist/main/chunks, the source in main/store: each has its own way up. */
function builtInFolder(): string {
  const candidates = ['../presets', '../../presets'].map((way) =>
    fileURLToPath(new URL(way, import.meta.url)),
  );
  const found = candidates.find((folder) => existsSync(folder));
  if (!found) throw new FileError(candidates[0], 'the built-in presets are missing', 'Install Oxgall again.');
  return found;
}
