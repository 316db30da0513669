import type { Parameters } from '../../../core/parameters/table.ts';
import type { State } from '../../../core/presets/state.ts';
import type { OutputChange } from '../../../core/recipes/outputSettings.ts';
import type { Recipe } from '../../../core/recipes/recipe.ts';

/**
 * What the program remembers of a photo and of presets. The host holds the recipe of every open photo and saves it
 * shortly after each change; the window shows it and tells what lies on the easel.
 */
export interface MemoryCommands {
  readMemory: { input: OfPhoto; output: PhotoMemory };
  /** Tells what lies on the easel now, after undo and redo too. */
  layWork: { input: OfPhoto & { work: WorkOnEasel }; output: PhotoMemory };
  /** Keeps what lies on the easel as a new state. */
  keepState: { input: OfPhoto & { work: WorkOnEasel; note: string }; output: PhotoMemory };
  /** Appends a state equal to one that was; changes nobody kept are kept first. */
  returnToState: { input: OfPhoto & { preset: string; stateId: string }; output: PhotoMemory };
  /** Lays a preset on the easel, at its newest state unless one is named; unkept changes are kept first. */
  layPreset: { input: OfPhoto & { preset: string; stateId?: string }; output: PhotoMemory };
  /** Writes beside a state: a note, or the name of the branch that begins with it. An empty text wipes it. */
  writeBeside: {
    input: OfPhoto & { preset: string; stateId: string; note?: string; branch?: string };
    output: PhotoMemory;
  };
  /** Keeps the state on the easel again under today's engine. */
  repaintWithEngine: { input: OfPhoto; output: PhotoMemory };
  /** Takes the look of another photo's recipe, given as the text of its file. */
  takeLook: { input: OfPhoto & { recipeText: string }; output: PhotoMemory };
  /** Makes one recipe of ours and of what somebody else saved meanwhile. */
  keepBoth: { input: OfPhoto; output: PhotoMemory };

  listPresets: { input: Record<string, never>; output: PresetShelfView };
  createPreset: {
    input: { title: string; parameters: Partial<Parameters>; note: string };
    output: PresetShelfView & { name: string };
  };
  /** A state kept on a photo goes into a preset of one's own too. */
  addToPreset: {
    input: { name: string; parameters: Partial<Parameters>; note: string };
    output: PresetShelfView;
  };
  duplicatePreset: {
    input: { name: string; title?: string };
    output: PresetShelfView & { name: string };
  };
  renamePreset: { input: { name: string; title: string }; output: PresetShelfView };
  describePreset: { input: { name: string; description: string }; output: PresetShelfView };
  /** Puts a preset of one's own into the bin. */
  removePreset: { input: { name: string }; output: PresetShelfView & { binId: string } };
  restorePreset: { input: { binId: string }; output: PresetShelfView };
  /** Writes presets into one file. */
  exportPresets: {
    input: { names: string[]; folder: string; fileName: string };
    output: { path: string };
  };
  /** Takes in presets from a file's text. */
  importPresets: { input: { text: string; fileName: string }; output: PresetShelfView & { names: string[] } };
}

interface OfPhoto {
  photoId: string;
}

/** What lies on the easel: a state and the parameters as they are now. */
export interface WorkOnEasel {
  preset: string;
  stateId: string;
  parameters: Partial<Parameters>;
  /** Settings that are missing stay as they are; a crop frame of null is taken away. */
  output?: OutputChange;
}

export interface PhotoMemory {
  photoId: string;
  recipe: Recipe;
  recipePath: string;
  /**
   * `mirrored`: the photo's folder cannot be written, so the recipe lies elsewhere. `readOnly`: written by a newer
   * version; nothing is saved.
   */
  access: 'writable' | 'mirrored' | 'readOnly';
  /** Whether the photo's bytes are those that the recipe was made for. */
  photo: 'same' | 'changed';
  /** There is a file: something was once changed, kept or delivered. */
  isKept: boolean;
  /** The state on the easel was kept by another engine, which may paint it differently. */
  olderEngine: { keptBy: string; today: string } | null;
  /** Plain sentences for the user; usually empty. */
  remarks: string[];
  saved: { kind: 'saved' | 'waiting' | 'failed' | 'conflict'; message: string };
}

/** A preset as the window offers it. */
export interface PresetOffer {
  /** What recipes call it. */
  name: string;
  /** As people read it. */
  title: string;
  /** One plain sentence. */
  description: string;
  /** Of its newest state. */
  parameters: Parameters;
  /** Built-in ones stay as they are. */
  isBuiltIn: boolean;
  /** Oldest first. */
  states: State[];
}

export interface PresetShelfView {
  presets: PresetOffer[];
  /** One sentence for each file that could not be used. */
  problems: string[];
  bin: { binId: string; title: string; states: number }[];
}
