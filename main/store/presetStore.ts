import { constants, copyFile, mkdir, readdir, rename, rm } from 'node:fs/promises';
import { basename, join } from 'node:path';
import {
  duplicatePreset,
  type Moment,
  makePreset,
  mergePresets,
  type Preset,
  presetFromBuiltIn,
} from '../../core/presets/preset.ts';
import { bundlePresets, freeTitle, type Imported, importPreset } from '../../core/presets/presetBundle.ts';
import { freeName, nameFromTitle } from '../../core/presets/presetName.ts';
import { makeState, type StateContent } from '../../core/presets/state.ts';
import { threadFaults } from '../../core/presets/thread.ts';
import { presetBundleFormat, presetFormat } from '../../core/recipes/documentFormats.ts';
import { documentText, type Opened, openDocument } from '../../core/recipes/openDocument.ts';
import { FileError } from '../files/fileError.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { loadBuiltInPresets } from './builtInPresets.ts';
import { withFileLock } from './fileLock.ts';
import { freePath } from './freePath.ts';
import { readVersioned, replaceText, UnreadableText } from './versionedFile.ts';

/** A preset as the program has it. */
export interface StoredPreset {
  preset: Preset;
  /** Built-in ones are read-only; keeping a state makes a preset of one's own. */
  isBuiltIn: boolean;
  /** Null for built-in ones. */
  path: string | null;
  /** Plain sentences: recovered, changed outside. Usually empty. */
  remarks: string[];
}

/** All presets, and what was wrong with the files that hold none. */
export interface PresetShelf {
  presets: StoredPreset[];
  /** One sentence for each file that could not be used; none of them was touched. */
  problems: string[];
}

/** A preset that was deleted and can come back. */
export interface BinnedPreset {
  /** Handed to `restore`. */
  binId: string;
  preset: Preset;
}

export interface PresetStoreOptions {
  dataFolder: string;
  engineVersion: string;
  /** Where the built-in presets lie; found beside the bundle unless given. */
  builtInFolder?: string;
}

/**
 * The presets: built-in ones and those in the user's data folder. Presets only grow, so two windows that save one
 * preset end with every state of both.
 */
export class PresetStore {
  readonly #options: PresetStoreOptions;
  readonly #folder: string;
  readonly #copies: string;
  readonly #bin: string;

  constructor(options: PresetStoreOptions) {
    this.#options = options;
    this.#folder = join(options.dataFolder, 'presets');
    this.#copies = join(options.dataFolder, 'preset-copies');
    this.#bin = join(options.dataFolder, 'bin', 'presets');
  }

  /** Every preset, built-in ones first, each group by title. */
  async list(): Promise<PresetShelf> {
    const { builtInFolder, engineVersion } = this.#options;
    const builtIn = (await loadBuiltInPresets(builtInFolder)).map((preset): StoredPreset => {
      return { preset: presetFromBuiltIn(preset, engineVersion), isBuiltIn: true, path: null, remarks: [] };
    });
    const problems: string[] = [];
    const own: StoredPreset[] = [];
    for (const name of await namesIn(this.#folder)) {
      const read = await this.#read(join(this.#folder, name));
      if (typeof read === 'string') problems.push(read);
      else own.push(read);
    }
    return { presets: [...byTitle(builtIn), ...byTitle(own)], problems };
  }

  /**
   * One preset.
   * @throws FileError where there is none of that name, with the names there are
   */
  async get(name: string): Promise<StoredPreset> {
    const { presets } = await this.list();
    // A preset of one's own goes before a built-in one that a later version brought under its name.
    const found = presets.filter(({ preset }) => preset.name === name).at(-1);
    if (found) return found;
    const names = presets.map(({ preset }) => preset.name).join(', ');
    throw new FileError(name, 'there is no preset of this name', `Choose one of ${names}.`);
  }

  /**
   * Saves a preset of the user's. States that another window kept meanwhile are taken in.
   * @returns the preset as it is on the disk now
   * @throws FileError where it cannot be written, or is a built-in one's
   */
  async save(preset: Preset): Promise<Preset> {
    await this.#refuseBuiltIn(preset.name);
    const path = this.#pathOf(preset.name);
    await mkdir(this.#folder, { recursive: true }).catch((failure) => {
      throw fileErrorFrom(this.#folder, failure);
    });
    const lock = join(this.#options.dataFolder, 'locks', `preset-${preset.name}`);
    return withFileLock(lock, async () => {
      const merged = await this.#mergedWithDisk(path, preset);
      await replaceText(path, documentText(merged));
      await mkdir(this.#copies, { recursive: true }).catch(() => {});
      // A second line only: the preset itself is saved.
      await replaceText(join(this.#copies, basename(path)), documentText(merged)).catch(() => {});
      return merged;
    });
  }

  async #mergedWithDisk(path: string, preset: Preset): Promise<Preset> {
    const opened = await open(path);
    if (!opened) return preset;
    if (opened.kind === 'usable') return mergePresets(preset, opened.document);
    if (opened.kind === 'damaged') {
      // Put aside, never overwritten: somebody may know what it was.
      await copyFile(path, await freePath(`${path}.damaged`), constants.COPYFILE_EXCL);
      return preset;
    }
    throw new FileError(path, opened.message, 'Update Oxgall, or put the file aside.');
  }

  /**
   * Makes a preset of parameters.
   * @param title what it is to be called; a number is added where that is taken
   * @param parameters in full
   */
  async create(
    title: string,
    parameters: StateContent['parameters'],
    moment: Moment,
    note = '',
  ): Promise<Preset> {
    const { presets } = await this.list();
    const state = makeState({ parameters, note, parent: null, ...moment }, 1);
    const free = freeTitle(title.trim(), new Set(presets.map(({ preset }) => preset.title)));
    return this.save(
      makePreset({ name: await this.#freeName(nameFromTitle(free)), title: free, states: [state] }),
    );
  }

  /** A preset of the user's own with the same states. */
  async duplicate(name: string, title?: string): Promise<Preset> {
    const { presets } = await this.list();
    const { preset } = await this.get(name);
    const titles = new Set(presets.map((stored) => stored.preset.title));
    const free = freeTitle(title?.trim() || preset.title, titles);
    return this.save(duplicatePreset(preset, await this.#freeName(nameFromTitle(free)), free));
  }

  /**
   * Puts a preset of the user's into the bin.
   * @returns what `restore` takes
   */
  async remove(name: string): Promise<string> {
    await this.#refuseBuiltIn(name);
    const path = this.#pathOf(name);
    await mkdir(this.#bin, { recursive: true });
    const inBin = await freePath(join(this.#bin, `${name}.json`));
    await rename(path, inBin).catch((failure) => {
      throw fileErrorFrom(path, failure);
    });
    return basename(inBin);
  }

  /** What lies in the bin. */
  async listBin(): Promise<BinnedPreset[]> {
    const binned: BinnedPreset[] = [];
    for (const binId of (await readdir(this.#bin).catch(() => [])).sort()) {
      const opened = await open(join(this.#bin, binId));
      if (opened?.kind === 'usable') binned.push({ binId, preset: opened.document });
    }
    return binned;
  }

  /** Takes a preset out of the bin; under another name where its own was given away meanwhile. */
  async restore(binId: string): Promise<Preset> {
    const path = join(this.#bin, basename(binId));
    const opened = await open(path);
    if (opened?.kind !== 'usable')
      throw new FileError(
        path,
        opened?.message ?? 'there is no such preset in the bin',
        'Choose another one.',
      );
    const [imported] = await this.#importAll([opened.document]);
    await rm(path, { force: true });
    return imported.preset;
  }

  /** The text of one file that holds these presets with all their states. */
  async exportText(names: readonly string[]): Promise<string> {
    const stored = await Promise.all(names.map((name) => this.get(name)));
    return documentText(bundlePresets(stored.map(({ preset }) => preset)));
  }

  /**
   * Brings in presets from a file's text: one preset, or a file of presets.
   * @param path to name in errors
   * @throws FileError where the text is neither, or a state was altered
   */
  async importText(text: string, path: string): Promise<Imported[]> {
    const remedy = 'Export it again where it came from.';
    const isSingle = formatOf(text) === presetFormat.format;
    const opened = isSingle ? openDocument(text, presetFormat) : openDocument(text, presetBundleFormat);
    if (opened.kind !== 'usable') throw new FileError(path, opened.message, remedy);
    const presets =
      'presets' in opened.document ? (opened.document.presets as Preset[]) : [opened.document as Preset];
    try {
      return await this.#importAll(presets);
    } catch (failure) {
      if (!(failure instanceof RangeError)) throw failure;
      throw new FileError(path, failure.message, remedy, { cause: failure });
    }
  }

  async #importAll(presets: readonly Preset[]): Promise<Imported[]> {
    const known = (await this.list()).presets;
    const isReadOnly = (preset: Preset) =>
      known.some((stored) => stored.isBuiltIn && stored.preset.name === preset.name);
    const ours = known.map(({ preset }) => preset);
    // All are checked before the first is saved, so that a bad file changes nothing.
    const imported: Imported[] = [];
    for (const preset of presets) {
      const one = importPreset(preset, [...ours, ...imported.map((done) => done.preset)], isReadOnly);
      imported.push(one);
    }
    for (const one of imported) one.preset = await this.save(one.preset);
    return imported;
  }

  async #read(path: string): Promise<StoredPreset | string> {
    const opened = await open(path).catch((failure: Error) => failure.message);
    if (typeof opened === 'string') return opened;
    if (!opened) return `${path}: the file is gone.`;
    if (opened.kind === 'newer') return `${path}: ${opened.message}`;
    if (opened.kind === 'usable') return asStored(opened.document, path, []);
    const copy = await open(join(this.#copies, basename(path)));
    if (copy?.kind !== 'usable') return `${path}: ${opened.message}. There is no earlier copy.`;
    return asStored(copy.document, path, [`${path}: ${opened.message}. The last whole copy was opened.`]);
  }

  async #refuseBuiltIn(name: string): Promise<void> {
    const builtIn = await loadBuiltInPresets(this.#options.builtInFolder);
    if (!builtIn.some((preset) => preset.name === name)) return;
    if ((await namesIn(this.#folder)).includes(`${name}.json`)) return;
    throw new FileError(name, 'built-in presets stay as they are', 'Duplicate it and work on the duplicate.');
  }

  /** A name that neither a preset nor a file that could not be read has. */
  async #freeName(wanted: string): Promise<string> {
    const builtIn = await loadBuiltInPresets(this.#options.builtInFolder);
    const files = (await namesIn(this.#folder)).map((name) => basename(name, '.json'));
    return freeName(wanted, new Set([...builtIn.map((preset) => preset.name), ...files]));
  }

  #pathOf(name: string): string {
    return join(this.#folder, `${name}.json`);
  }
}

function formatOf(text: string): unknown {
  try {
    return JSON.parse(text)?.format;
  } catch {
    return null;
  }
}

function asStored(preset: Preset, path: string, remarks: string[]): StoredPreset {
  const faults = threadFaults(preset.states).map((fault) => `${preset.title}: ${fault.problem}.`);
  return { preset, isBuiltIn: false, path, remarks: [...remarks, ...faults] };
}

async function namesIn(folder: string): Promise<string[]> {
  const names = await readdir(folder).catch(() => []);
  return names.filter((name) => name.endsWith('.json') && !name.startsWith('.')).sort();
}

async function open(path: string): Promise<Opened<Preset> | null> {
  try {
    const read = await readVersioned(path);
    return read && openDocument(read.text, presetFormat);
  } catch (failure) {
    if (failure instanceof UnreadableText) return { kind: 'damaged', message: failure.problem };
    throw failure;
  }
}

function byTitle(presets: StoredPreset[]): StoredPreset[] {
  return presets.sort((one, other) => one.preset.title.localeCompare(other.preset.title, 'en'));
}
