import { join } from 'node:path';
import { parseParameters } from '../../core/parameters/parse.ts';
import { fullParameters } from '../../core/presets/parametersSchema.ts';
import { describePreset, keepInPreset, latestState, renamePreset } from '../../core/presets/preset.ts';
import { recipeFormat } from '../../core/recipes/documentFormats.ts';
import { openDocument } from '../../core/recipes/openDocument.ts';
import {
  keepState,
  layPreset,
  repaintWithEngine,
  returnToState,
  takeLook,
  writeBeside,
} from '../../core/recipes/recipeHistory.ts';
import type { PresetStore, StoredPreset } from '../store/presetStore.ts';
import { replaceText } from '../store/versionedFile.ts';
import type { MemoryCommands, PresetOffer, PresetShelfView } from './api/memoryCommands.ts';
import type { CommandHandlers } from './commandHandlers.ts';
import type { HostState } from './host.ts';
import { withWork } from './photoMemories.ts';
import { placeNew } from './placeFile.ts';
import { Refusal } from './refusal.ts';
import { checkFileName } from './savePainting.ts';

type MemoryHandlers = Pick<CommandHandlers, keyof MemoryCommands>;

/** The commands of the memory; each is described where the contract lists it. */
export function createMemoryHandlers(state: HostState): MemoryHandlers {
  return { ...photoHandlers(state), ...presetHandlers(state) };
}

function photoHandlers({
  memories,
  parts,
}: HostState): Pick<
  MemoryHandlers,
  | 'readMemory'
  | 'layWork'
  | 'keepState'
  | 'returnToState'
  | 'layPreset'
  | 'writeBeside'
  | 'repaintWithEngine'
  | 'takeLook'
  | 'keepBoth'
> {
  return {
    readMemory: ({ photoId }) => memories.view(photoId),
    layWork: ({ photoId, work }) => memories.layWork(photoId, work as never),
    keepState: ({ photoId, work, note }) =>
      memories.change(photoId, (recipe, moment) => keepState(withWork(recipe, work as never), note, moment)),
    returnToState: ({ photoId, preset, stateId }) =>
      memories.change(photoId, (recipe, moment) =>
        orNotFound(() => returnToState(recipe, stateId, moment, preset)),
      ),
    layPreset: async ({ photoId, preset, stateId }) => {
      const { presets } = await parts.loadStores();
      const { preset: stored } = await presets.get(preset);
      return memories.change(photoId, (recipe, moment) =>
        orNotFound(() => layPreset(recipe, stored, stateId ?? latestState(stored).id, moment)),
      );
    },
    writeBeside: ({ photoId, preset, stateId, note, branch }) =>
      memories.change(photoId, (recipe) =>
        orNotFound(() => writeBeside(recipe, preset, stateId, definedOnly({ note, branch }))),
      ),
    repaintWithEngine: ({ photoId }) => memories.change(photoId, repaintWithEngine),
    takeLook: ({ photoId, recipeText }) => {
      const opened = openDocument(recipeText, recipeFormat);
      if (opened.kind !== 'usable')
        throw new Refusal('FileError', opened.message, 'Choose a recipe file that Oxgall has written.');
      return memories.change(photoId, (recipe, moment) => takeLook(recipe, opened.document, moment));
    },
    keepBoth: ({ photoId }) => memories.keepBoth(photoId),
  };
}

function presetHandlers({
  parts,
  memories,
  grants,
}: HostState): Omit<MemoryHandlers, keyof ReturnType<typeof photoHandlers>> {
  const store = async () => (await parts.loadStores()).presets;
  return {
    listPresets: async () => readShelf(await store()),
    createPreset: async ({ title, parameters, note }) => {
      const presets = await store();
      const made = await presets.create(title, parseParameters(parameters), memories.moment(), note);
      return { ...(await readShelf(presets)), name: made.name };
    },
    addToPreset: async ({ name, parameters, note }) => {
      const presets = await store();
      const { preset } = await presets.get(name);
      await presets.save(
        keepInPreset(preset, { parameters: parseParameters(parameters), note }, memories.moment()),
      );
      return readShelf(presets);
    },
    duplicatePreset: async ({ name, title }) => {
      const presets = await store();
      const made = await presets.duplicate(name, title);
      return { ...(await readShelf(presets)), name: made.name };
    },
    renamePreset: async ({ name, title }) => {
      const presets = await store();
      await presets.save(renamePreset((await presets.get(name)).preset, title));
      return readShelf(presets);
    },
    describePreset: async ({ name, description }) => {
      const presets = await store();
      await presets.save(describePreset((await presets.get(name)).preset, description));
      return readShelf(presets);
    },
    removePreset: async ({ name }) => {
      const presets = await store();
      const binId = await presets.remove(name);
      return { ...(await readShelf(presets)), binId };
    },
    restorePreset: async ({ binId }) => {
      const presets = await store();
      await presets.restore(binId);
      return readShelf(presets);
    },
    exportPresets: async ({ names, folder, fileName }) => {
      const text = await (await store()).exportText(names);
      const target = join(grants.checkWriting(folder), checkFileName(fileName));
      return { path: await placeNew(target, (path) => replaceText(path, text)) };
    },
    importPresets: async ({ text, fileName }) => {
      const presets = await store();
      const imported = await presets.importText(text, fileName);
      return { ...(await readShelf(presets)), names: imported.map(({ preset }) => preset.name) };
    },
  };
}

/** The presets and what lies in the bin, as the window shows them. */
export async function readShelf(store: PresetStore): Promise<PresetShelfView> {
  const [shelf, bin] = await Promise.all([store.list(), store.listBin()]);
  return {
    presets: shelf.presets.map(offerOf),
    problems: shelf.problems,
    bin: bin.map(({ binId, preset }) => ({ binId, title: preset.title, states: preset.states.length })),
  };
}

function offerOf({ preset, isBuiltIn }: StoredPreset): PresetOffer {
  const { name, title, summary, states } = preset;
  return {
    name,
    title,
    description: summary,
    parameters: fullParameters(latestState(preset).parameters),
    isBuiltIn,
    states,
  };
}

/** A state or preset that is not there is the asker's mistake, not ours. */
function orNotFound<T>(work: () => T): T {
  try {
    return work();
  } catch (error) {
    if (error instanceof RangeError) throw new Refusal('NotFound', `${error.message}.`);
    throw error;
  }
}

function definedOnly<T extends object>(values: T): Partial<T> {
  return Object.fromEntries(Object.entries(values).filter(([, value]) => value !== undefined)) as Partial<T>;
}
