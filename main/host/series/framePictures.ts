import { throughTable } from '../../../core/colour/colourTable.ts';
import { encodeFrame } from '../../../core/hostProtocol/frame.ts';
import type { Parameters } from '../../../core/parameters/table.ts';
import type { DecodedPhoto } from '../../../core/pixels/photo.ts';
import { type FrameMatch, parametersWithMatch } from '../../../core/series/frameMatch.ts';
import { type Palette, paletteOf } from '../../../core/series/palette.ts';
import { SpilledPixels } from '../../files/spilledPixels.ts';
import type { SpilledPhoto } from '../../files/spillPhoto.ts';
import type { FramePictureHeader } from '../api/seriesCommands.ts';
import type { HostParts, PhotoFacts } from '../hostParts.ts';
import { parametersForReduced } from '../levels.ts';
import { ScreenTables } from '../screenTables.ts';
import { SmallPictureTurns } from '../smallPictureTurns.ts';
import { PictureCache } from './pictureCache.ts';

/** Encoded pictures kept: some two hundred fine ones, or a thousand rough ones. */
const cacheBytes = 96 * 2 ** 20;
/** Long edge of a rough picture, at least: painted within a few hundredths of a second. */
const roughEdgePx = 150;
/** Palettes are a few kilobytes each. */
const palettesKept = 2000;

/** A frame whose picture is wanted. */
export interface PictureOrder {
  frameId: string;
  path: string;
  /** Changes when the file does. */
  stamp: string;
  facts: PhotoFacts;
  parameters: Parameters;
  printLongEdgeMm: number;
  pictureKey: string;
  /** How the frame is matched, given a way to the colours of any photo. */
  match(palette: PaletteOf): Promise<FrameMatch>;
}

/** A photo as the series knows it. */
export type PhotoOnDisk = Pick<PictureOrder, 'path' | 'stamp' | 'facts'>;
export type PaletteOf = (photo: PhotoOnDisk) => Promise<Palette>;

/** Small painted pictures of frames, from reduced decodes; full-size pixels are never held for them. */
export class FramePictures {
  readonly #cache = new PictureCache(cacheBytes);
  readonly #turns = new SmallPictureTurns(2);
  readonly #palettes = new Map<string, Promise<Palette>>();

  readonly #screenTables: ScreenTables;

  constructor(private readonly parts: Pick<HostParts, 'loadEngine' | 'loadFiles' | 'loadComposeSmall'>) {
    this.#screenTables = new ScreenTables(() => parts.loadFiles());
  }

  /** Nothing is being painted or waits for it. */
  get isIdle(): boolean {
    return this.#turns.isIdle;
  }

  get heldBytes(): number {
    return this.#cache.heldBytes;
  }

  /**
   * Paints a frame's picture, or finds it painted.
   * @param longEdgePx about how long the long edge shall be
   * @param rough quick and small, for the first moments
   */
  async paint(
    order: PictureOrder,
    { longEdgePx, rough }: { longEdgePx: number; rough: boolean },
    signal: AbortSignal,
  ): Promise<Uint8Array<ArrayBuffer>> {
    const key = `${order.path}|${order.stamp}|${order.pictureKey}|${rough ? 'rough' : longEdgePx}`;
    const held = this.#cache.get(key);
    if (held) return held;
    const painted = await this.#turns.paintSmall(signal, () =>
      this.#paint(order, { longEdgePx, rough }, signal),
    );
    this.#cache.put(key, painted);
    return painted;
  }

  async #paint(
    order: PictureOrder,
    { longEdgePx, rough }: { longEdgePx: number; rough: boolean },
    signal: AbortSignal,
  ): Promise<Uint8Array<ArrayBuffer>> {
    const wanted = rough ? Math.min(longEdgePx, roughEdgePx) : longEdgePx;
    // A fine picture is painted one level down from its decode, as the pyramid of the whole photo would have it.
    const { decoded, steps } = await this.#decode(order, rough ? wanted : wanted * 2);
    this.#notePalette(order, decoded);
    const match = await order.match((photo) => this.paletteOf(photo));
    const [engine, compose] = await Promise.all([this.parts.loadEngine(), this.parts.loadComposeSmall()]);
    if (signal.aborted && isSpilled(decoded)) decoded.pixels.discard();
    signal.throwIfAborted();
    const options = { toneMap: match.toneMap, signal };
    const photo = isSpilled(decoded)
      ? await (await this.parts.loadFiles()).holdPhoto(engine, decoded, options)
      : await engine.open(decoded, options);
    try {
      const parameters = parametersWithMatch(order.parameters, match);
      const level = Math.max(
        0,
        photo.levels.filter(({ widthPx, heightPx }) => Math.max(widthPx, heightPx) >= wanted).length - 1,
      );
      const { strata } = await engine.paintStrata(
        photo,
        parametersForReduced(parameters, steps, photo.noiseFloor),
        { level },
        { signal, printLongEdgeMm: order.printLongEdgeMm },
      );
      signal.throwIfAborted();
      const { widthPx, heightPx } = strata;
      const { frameId, pictureKey } = order;
      const header: FramePictureHeader = { frameId, widthPx, heightPx, rough, pictureKey };
      const rgba = await compose(strata, parameters);
      const table = await this.#screenTables.of(order.path);
      if (table) throughTable(rgba, table);
      return encodeFrame(header, { rgba });
    } finally {
      photo.close();
    }
  }

  /** The photo at 1/2^`steps` of its size, no smaller than `leastEdgePx`. */
  async #decode(
    { path, facts }: PhotoOnDisk,
    leastEdgePx: number,
  ): Promise<{ decoded: DecodedPhoto | SpilledPhoto; steps: number }> {
    const files = await this.parts.loadFiles();
    const longEdgePx = Math.max(facts.widthPx, facts.heightPx);
    const steps = Math.max(0, Math.floor(Math.log2(longEdgePx / leastEdgePx)));
    const quick = steps > 0 ? await files.readQuick(path, facts, steps) : null;
    return quick ? { decoded: quick, steps } : { decoded: await files.readPhoto(path), steps: 0 };
  }

  /** The colours of a photo, from a small decode; found once. */
  paletteOf(photo: PhotoOnDisk): Promise<Palette> {
    const key = `${photo.path}|${photo.stamp}`;
    const known = this.#palettes.get(key);
    if (known) return known;
    const coming = this.#decode(photo, roughEdgePx).then(({ decoded }) => {
      if (!isSpilled(decoded)) return paletteOf(samples16(decoded));
      decoded.pixels.discard();
      throw new RangeError(`Expected a photo that can be read small, received ${photo.path}`);
    });
    coming.catch(() => this.#palettes.delete(key));
    this.#keepPalette(key, coming);
    return coming;
  }

  #notePalette({ path, stamp }: PhotoOnDisk, decoded: DecodedPhoto | SpilledPhoto): void {
    const key = `${path}|${stamp}`;
    if (!isSpilled(decoded) && !this.#palettes.has(key))
      this.#keepPalette(key, Promise.resolve(paletteOf(samples16(decoded))));
  }

  #keepPalette(key: string, palette: Promise<Palette>): void {
    this.#palettes.set(key, palette);
    for (const oldest of this.#palettes.keys()) {
      if (this.#palettes.size <= palettesKept) return;
      this.#palettes.delete(oldest);
    }
  }
}

/** A very large photo of a kind that cannot be read small lies in a temporary file. */
function isSpilled(photo: DecodedPhoto | SpilledPhoto): photo is SpilledPhoto {
  return photo.pixels instanceof SpilledPixels;
}

/** About as many pixels as tell the colours of a photo. */
const palettePixels = 40_000;

/** R, G, B of every so many pixels, on 16 bits. */
function samples16({ pixels, channels, widthPx, heightPx }: DecodedPhoto): Uint16Array {
  const count = widthPx * heightPx;
  const stride = Math.max(1, Math.floor(count / palettePixels));
  const factor = pixels.BYTES_PER_ELEMENT === 1 ? 257 : 1;
  const rgb16 = new Uint16Array(Math.ceil(count / stride) * 3);
  for (let i = 0, to = 0; i < count; i += stride)
    for (let c = 0; c < 3; c++) rgb16[to++] = pixels[i * channels + c] * factor;
  return rgb16;
}
