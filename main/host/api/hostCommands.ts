import type { Parameters } from '../../../core/parameters/table.ts';
import type { Rect } from '../../../core/pixels/photo.ts';
import type { OutputChange } from '../../../core/recipes/outputSettings.ts';
import type { MemoryCommands, PhotoMemory, PresetOffer } from './memoryCommands.ts';
import type { RunCommands } from './runCommands.ts';
import type { SeriesCommands } from './seriesCommands.ts';

/**
 * The host's commands: `POST /api/<name>` with JSON in, and JSON (`output`) or a frame of pixels (`frame`)
 * out. The interface takes these types and nothing else of the host.
 */
export interface HostCommands extends MemoryCommands, SeriesCommands, RunCommands {
  /** What the first screen needs. */
  startSession: { input: Record<string, never>; output: Session };
  /**
   * Opens a photo the user chose. Answers as soon as there is something to paint: for a large JPEG that is
   * a quick picture (`stage: 'quick'`) while the rest is still being decoded, else the whole photo.
   */
  openPhoto: { input: { path: string }; output: OpenedPhoto };
  /** Answers when the photo is wholly decoded; at once where it is already. */
  awaitPhoto: { input: { photoId: string }; output: OpenedPhoto };
  /** Gives the photo's memory back; painting that is under way is cancelled. */
  closePhoto: { input: { photoId: string }; output: Done };
  /** Paints one level, or a region of it, as strata: planes `ground`, `body`, `line`, and `relief` where its strength is above 0. */
  paintStrata: { input: PaintStrataInput; frame: StrataHeader };
  /** Paints and composes a small picture: plane `rgba`, 8 bits. For presets, states and recents. */
  paintSmallPicture: { input: PaintSmallPictureInput; frame: SmallPictureHeader };
  /**
   * How far a file for that profile moves each colour of the photo: plane `table` for `markOutside`, absent where the
   * photo's own colours are kept.
   */
  readGamutTable: { input: { photoId: string; profile: PrintProfileName }; frame: GamutTableHeader };
  /**
   * The way of a photo's colours to a canvas of sRGB, or of Display P3: plane `table` for `throughTable`, absent where
   * numbers are shown as they are; the header says in which space they are then. Small pictures are in sRGB already.
   */
  readScreenTable: { input: { photoId: string; screen?: ScreenSpaceName }; frame: ScreenTableHeader };
  /** Paints at full resolution for print, as the photo's recipe asks, and writes a file; progress comes as events under the call's id. */
  savePainting: { input: SavePaintingInput; output: SavedPainting };
  /** Folders and photos in a folder; the home folder unless one is named that an earlier answer showed. */
  listFolder: { input: { path?: string; wanted?: 'profiles' }; output: FolderListing };
  /** What a file for that profile would be. */
  describeProfile: { input: { photoId: string; profile: PrintProfileName }; output: ProfileFacts };
  /** The system's own dialog, where `session.desktop.fileDialogs` says there is one. */
  chooseWithDialog: { input: ChooseInput; output: Choice };
  listRecents: { input: Record<string, never>; output: { recents: Recent[] } };
  forgetRecent: { input: { path: string }; output: { recents: Recent[] } };
  /** Makes the demo photos ready and names them; they may be opened from then on. */
  openDemo: { input: Record<string, never>; output: DemoSeries };
  /** Shows a file in the system's file browser, where `session.desktop.revealFiles`. */
  revealFile: { input: { path: string }; output: Done };
  /** Cancels a call by its id. The client sends it by itself when its signal aborts. */
  cancelCall: { input: { callId: string }; output: { cancelled: boolean } };
}

export type CommandName = keyof HostCommands;

export type Done = Record<string, never>;

/** What this shell can do beyond a browser page. */
export interface DesktopCapabilities {
  /** `chooseWithDialog` works; else the interface shows its own folder picker. */
  fileDialogs: boolean;
  /** `window.oxgallDesktop.pathOfDropped(file)` gives a dropped file's path and lets it be opened. */
  droppedPaths: boolean;
  revealFiles: boolean;
  /** The application menu sends `menu` events; else all commands live in the window. */
  menu: boolean;
}

export interface Session {
  appVersion: string;
  engineVersion: string;
  shell: 'electron' | 'loopback';
  /** `linux`, `darwin`, `win32`: which modifier keys to name. */
  platform: string;
  workers: number;
  desktop: DesktopCapabilities;
  presets: PresetOffer[];
  /** One sentence for each preset file that could not be used. */
  presetProblems: string[];
  /** Newest first. */
  recents: Recent[];
  demo: { available: boolean; title: string };
  /** What the program was started with, if anything. */
  opening: { kind: 'photo' | 'folder'; path: string } | null;
  homePath: string;
}

export interface Recent {
  path: string;
  /** How many photos a series has; missing where it is one photo. */
  frames?: number;
  name: string;
  folder: string;
  widthPx: number;
  heightPx: number;
  /** ISO 8601. */
  openedAt: string;
  /** False where the file is no longer there. */
  present: boolean;
}

export interface OpenedPhoto {
  photoId: string;
  path: string;
  name: string;
  folder: string;
  /**
   * `quick`: only levels from `readyFromLevel` on can be painted at once, from a quick decode, and a
   * finer level waits; `full`: every level.
   */
  stage: 'quick' | 'full';
  /** Smallest level number that paints without waiting: 0 when `full`. */
  readyFromLevel: number;
  widthPx: number;
  heightPx: number;
  format: string;
  /** As decoded so far; certain when `full`. */
  depth: 8 | 16;
  channels: 3 | 4;
  /** Level 0 is the full photo; each next one half the size, rounded up. */
  levels: LevelSize[];
  /** Measured at full resolution; null until `full`. */
  noiseFloor: number | null;
  densityPpi: number | null;
  /** What was assumed or converted while reading, in plain sentences. */
  remarks: string[];
  /** What the program remembers of it: its recipe, or a fresh one. */
  memory: PhotoMemory;
}

export interface LevelSize {
  widthPx: number;
  heightPx: number;
}

export interface PaintStrataInput {
  photoId: string;
  parameters: Partial<Parameters>;
  level: number;
  /** In pixels of `level`; the whole level unless given. */
  region?: Rect;
  view: string;
  omit?: ('ground' | 'body' | 'line')[];
  rough?: boolean;
  printLongEdgeMm?: number;
}

export interface StrataHeader {
  photoId: string;
  /** What was asked for. */
  askedLevel: number;
  /** What was painted: coarser than asked for when `rough`. */
  level: number;
  levelWidthPx: number;
  levelHeightPx: number;
  /** In pixels of `level`. */
  region: Rect;
  rough: boolean;
  /** `quick`: painted from the quick decode; ask again once `awaitPhoto` has answered. */
  source: 'quick' | 'full';
  groundChannels: 3 | 4;
  groundDepth: 8 | 16;
  paintMs: number;
}

export interface PaintSmallPictureInput {
  photoId: string;
  parameters: Partial<Parameters>;
  longEdgePx: number;
  view?: string;
  printLongEdgeMm?: number;
}

export interface SmallPictureHeader {
  photoId: string;
  widthPx: number;
  heightPx: number;
  source: 'quick' | 'full';
}

/** The photo's own, sRGB, Display P3, or an ICC file. */
export type PrintProfileName = 'keep' | 'srgb' | 'p3' | { file: string };

export interface ProfileFacts {
  /** What it calls itself; null where it does not say. */
  name: string | null;
  inks: 'RGB' | 'CMYK';
  /** The photo's painting has other colours, so that intent and black point matter. */
  isConverted: boolean;
}

export interface GamutTableHeader {
  photoId: string;
}

export interface ScreenTableHeader {
  photoId: string;
  space: ScreenSpaceName;
}

/** Spaces of a canvas. */
export type ScreenSpaceName = 'srgb' | 'p3';

export type OutputFormatName = 'jpeg' | 'png' | 'tiff' | 'webp';

export interface SavePaintingInput {
  photoId: string;
  parameters: Partial<Parameters>;
  folder: string;
  name: string;
  /** Over the print settings of the photo's recipe, for this file alone. */
  output?: OutputChange;
  whenTaken?: 'number' | 'replace';
}

export interface SavedPainting {
  /** Where the file is now; the name may have got a number. */
  path: string;
  name: string;
  folder: string;
  /** Of the file or folder of layers beside it; null where none were asked for. */
  layersName: string | null;
  widthPx: number;
  heightPx: number;
  sizeBytes: number;
  tookMs: number;
  /** With the delivery noted. */
  memory: PhotoMemory;
}

export interface FolderListing {
  path: string;
  name: string;
  /** From the root down to this folder; each may be listed. */
  crumbs: { name: string; path: string }[];
  /** Starting points: home, pictures, mounted volumes; where profiles lie too if those are wanted. */
  places: { name: string; path: string }[];
  folders: { name: string; path: string }[];
  photos: { name: string; path: string; sizeBytes: number; modifiedAt: string }[];
  /** Colour profiles, by their names. */
  profiles: { name: string; path: string }[];
  /** The folder holds more than the answer does. */
  truncated: boolean;
  writable: boolean;
}

export interface ChooseInput {
  kind: 'photo' | 'folder' | 'save' | 'profile';
  folder?: string;
  name?: string;
  format?: OutputFormatName;
}

/** `path` is null where the dialog was dismissed; for `save` it comes apart into folder and name too. */
export interface Choice {
  path: string | null;
  folder: string | null;
  name: string | null;
}

export interface DemoSeries {
  title: string;
  folder: string;
  /** Those that are there already; the others follow. */
  photos: { name: string; path: string }[];
}
