import type { Parameters } from '../../core/parameters/table.ts';
import type { DecodedPhoto, Strata } from '../../core/pixels/photo.ts';
import type { ScreenSpace } from '../colour/screenTable.ts';
import type { Engine, EnginePhoto, OpenOptions } from '../engine/engineApi.ts';
import type { AnyPictureFile, PhotoFile } from '../files/photoFile.ts';
import type { SpilledPhoto } from '../files/spillPhoto.ts';
import type {
  DeliveredPainting,
  DeliveryOptions,
  HeldPhotoFile,
  PaintingOrder,
} from '../painting/deliverPainting.ts';
import type { SizeOrder } from '../painting/printOrder.ts';
import type { Stores } from '../store/openStores.ts';
import type { ChooseInput, DemoSeries, DesktopCapabilities, ProfileFacts } from './api/hostCommands.ts';

/** Reads and writes pictures. */
export interface HostFiles {
  /** A very large photo is unpacked to a temporary file. */
  readPhoto(path: string, options?: { signal?: AbortSignal }): Promise<PhotoFile | SpilledPhoto>;
  /** Gives a photo to the engine, which sees to its pixels from then on, also when this fails. */
  holdPhoto(
    engine: Engine | Promise<Engine>,
    photo: PhotoFile | SpilledPhoto,
    options?: OpenOptions,
  ): Promise<EnginePhoto>;
  /** Reads a photo and brings it to the pixels of its print. */
  readForPrint(
    path: string,
    order: SizeOrder,
    options?: { signal?: AbortSignal },
  ): Promise<PhotoFile | SpilledPhoto>;
  /** Paints and writes a photo that was read for its print, and gives it up. */
  paintPrepared(
    engine: Engine | Promise<Engine>,
    photo: PhotoFile | SpilledPhoto,
    order: PaintingOrder,
    options: DeliveryOptions,
  ): Promise<DeliveredPainting>;
  /** Paints and writes a photo that the engine holds. */
  deliverPainting(
    engine: Engine,
    photo: HeldPhotoFile,
    order: PaintingOrder,
    options: DeliveryOptions,
  ): Promise<DeliveredPainting>;
  /** Writes `path`, which must not appear half-written whatever happens. */
  writePicture(path: string, picture: AnyPictureFile, options?: { signal?: AbortSignal }): Promise<unknown>;
  /** Size and kind without decoding; null where only decoding can tell. */
  readFacts(path: string): Promise<PhotoFacts | null>;
  /** A quick decode at 1/2^`level` of the size; null where the format has no short cut. */
  readQuick(path: string, facts: PhotoFacts, level: number): Promise<DecodedPhoto | null>;
  /** The way of the photo's colours to the screen, for `throughTable`; null where there is nothing to convert. */
  readScreenTable(path: string, screen: ScreenSpace): Promise<Uint16Array | null>;
  /** What a file for a profile would be. */
  describeProfile(path: string, profile: PrintProfile): Promise<ProfileFacts>;
  /** What a printing condition makes of the photo's colours, for `markOutside`; null where nothing is converted. */
  readGamutTable(path: string, profile: PrintProfile): Promise<Uint16Array | null>;
}

/** A profile to print for. */
export type PrintProfile = 'keep' | 'srgb' | 'p3' | { file: string };

/** What a photo's header says; width and height upright. */
export interface PhotoFacts {
  widthPx: number;
  heightPx: number;
  format: string;
  depth: 8 | 16;
  channels: 3 | 4;
  densityPpi: number | null;
  /** A decoder can give this photo at a half, a quarter, an eighth of its size for less work. */
  shrinksOnLoad: boolean;
}

/** What only a native shell can do. */
export interface Desktop {
  capabilities: DesktopCapabilities;
  /** @returns the chosen path, or null where the dialog was dismissed */
  choose?(input: ChooseInput): Promise<string | null>;
  reveal?(path: string): Promise<void>;
}

/** Composes strata to 8-bit R, G, B, alpha. */
export type ComposeSmall = (strata: Strata, parameters: Parameters) => Promise<Uint8Array>;

/** The demo series, made when it is first asked for. */
export interface DemoPart {
  title: string;
  /**
   * Answers when there are plates to look at; the rest are made after that.
   * @param onPlate called for each plate that comes later
   */
  prepare(onPlate?: () => void): Promise<DemoSeries>;
  /** Plates still to come into that folder. */
  coming(folder: string): number;
}

/** What a host is made of; each heavy part is loaded when first asked for, so that the window comes up fast. */
export interface HostParts {
  shell: 'electron' | 'loopback';
  appVersion: string;
  workers: number;
  loadEngine(): Promise<Engine>;
  loadFiles(): Promise<HostFiles>;
  loadStores(): Promise<Stores>;
  loadComposeSmall(): Promise<ComposeSmall>;
  demo: DemoPart | null;
  desktop: Desktop;
  /** Where recents, presets and copies of recipes are kept. */
  dataFolder: string;
  /** How many photos stay open; 3 unless given. */
  maximumOpenPhotos?: number;
}
