import type { Parameters } from '../../core/parameters/table.ts';
import type { DecodedPhoto, Rect, Strata } from '../../core/pixels/photo.ts';
import { countCoverage } from '../../core/series/inkHistogram.ts';
import type {
  BandOptions,
  ComposedPicture,
  Engine,
  EnginePhoto,
  PaintedBand,
  PaintOptions,
  PaintReview,
  RowSource,
} from '../../main/engine/engineApi.ts';

interface HeldPhoto extends EnginePhoto {
  /** One picture a level, 8 bits. */
  pictures: DecodedPhoto[];
}

/**
 * A small, slow engine in plain TypeScript for tests of the host: halves by means, paints by a box blur whose
 * width is the crispness, and looks at its signal after every row. Counts what it holds and does.
 */
export class BlurEngine implements Engine {
  readonly workers = 1;
  openPhotos = 0;
  paintingsStarted = 0;
  paintingsEnded = 0;
  paintingsAborted = 0;
  composedHeld = 0;
  /** Time given away after every row, so that a painting can be caught in the middle. */
  pauseMs = 0;
  lastParameters: Parameters | null = null;

  async open(photo: DecodedPhoto, options: { signal?: AbortSignal } = {}): Promise<EnginePhoto> {
    options.signal?.throwIfAborted();
    const pictures = [photo];
    for (let last = photo; Math.min(last.widthPx, last.heightPx) >= 8; last = pictures.at(-1)!)
      pictures.push(halve(last));
    this.openPhotos += 1;
    let isOpen = true;
    const held: HeldPhoto = {
      widthPx: photo.widthPx,
      heightPx: photo.heightPx,
      depth: photo.pixels instanceof Uint16Array ? 16 : 8,
      channels: photo.channels,
      levels: pictures.map(({ widthPx, heightPx }) => ({ widthPx, heightPx })),
      noiseFloor: 0.0125,
      isReadByRows: false,
      pictures,
      close: () => {
        if (isOpen) this.openPhotos -= 1;
        isOpen = false;
      },
    };
    return held;
  }

  async openRows(source: RowSource, options: { signal?: AbortSignal } = {}): Promise<EnginePhoto> {
    const { widthPx, heightPx, channels, bytesPerSample } = source;
    const bytes = new Uint8Array(widthPx * heightPx * channels * bytesPerSample);
    await source.readRows(0, heightPx, bytes, options.signal);
    source.close();
    const pixels = bytesPerSample === 1 ? bytes : new Uint16Array(bytes.buffer);
    return this.open({ widthPx, heightPx, channels, pixels }, options);
  }

  async paintStrata(
    photo: EnginePhoto,
    parameters: Parameters,
    where: { level: number; region?: Rect },
    options: PaintOptions = {},
  ): Promise<{ strata: Strata; times: ReturnType<typeof noTimes> }> {
    const picture = (photo as HeldPhoto).pictures[where.level];
    const region = where.region ?? { xPx: 0, yPx: 0, widthPx: picture.widthPx, heightPx: picture.heightPx };
    const body = await this.#blur(picture, region, parameters, options);
    const count = region.widthPx * region.heightPx;
    const strata: Strata = {
      widthPx: region.widthPx,
      heightPx: region.heightPx,
      ground: crop(picture, region),
      groundChannels: picture.channels,
      body,
      line: new Uint8Array(count).fill(7),
      relief: null,
    };
    return { strata, times: noTimes() };
  }

  async paintPicture(
    photo: EnginePhoto,
    parameters: Parameters,
    options: PaintOptions & { depth?: 8 | 16; review?: PaintReview } = {},
  ): Promise<ComposedPicture> {
    const { strata } = await this.paintStrata(photo, parameters, { level: 0 }, options);
    if (options.review) {
      // It knows no hold: the body stays as it is.
      for (let isAsked = true; isAsked; ) isAsked = (await options.review.body(strata.body)) !== null;
      options.review.ink(countCoverage(strata.line));
    }
    const { channels } = photo;
    const count = photo.widthPx * photo.heightPx;
    const pixels =
      options.depth === 16 ? new Uint16Array(count * channels) : new Uint8Array(count * channels);
    const most = options.depth === 16 ? 65535 : 255;
    for (let i = 0; i < count; i += 1)
      for (let c = 0; c < channels; c += 1)
        pixels[i * channels + c] = c < 3 ? Math.round((strata.body[i * 3 + c] / 65535) * most) : most;
    this.composedHeld += 1;
    return {
      pixels,
      times: noTimes(),
      release: () => {
        this.composedHeld -= 1;
      },
    };
  }

  async paintBands(
    photo: EnginePhoto,
    parameters: Parameters,
    receive: (band: PaintedBand) => Promise<void> | void,
    { onProgress: _, ...options }: BandOptions = {},
  ): Promise<ReturnType<typeof noTimes>> {
    const { pixels, release } = await this.paintPicture(photo, parameters, options);
    const strata = options.withStrata ? this.#layersOf(photo as HeldPhoto, pixels) : undefined;
    await receive({ topRow: 0, rowCount: photo.heightPx, pixels, strata });
    release();
    return noTimes();
  }

  async close(): Promise<void> {}

  /** Nothing but paint: its body is the painting. */
  #layersOf({ pictures: [{ pixels: ground, channels }] }: HeldPhoto, painted: Uint8Array | Uint16Array) {
    const full = painted instanceof Uint16Array ? 1 : 257;
    const body = new Uint16Array((painted.length / channels) * 3);
    for (let i = 0; i < body.length; i += 1) body[i] = painted[Math.floor(i / 3) * channels + (i % 3)] * full;
    const line = new Uint8Array(body.length / 3);
    return { ground, groundChannels: channels, body, line, relief: null };
  }

  async #blur(
    picture: DecodedPhoto,
    region: Rect,
    parameters: Parameters,
    options: PaintOptions,
  ): Promise<Uint16Array> {
    this.paintingsStarted += 1;
    this.lastParameters = parameters;
    const body = new Uint16Array(region.widthPx * region.heightPx * 3);
    try {
      for (let y = 0; y < region.heightPx; y += 1) {
        blurRow(picture, region, y, parameters['body.crispness'], body);
        if (this.pauseMs > 0) await new Promise((resolve) => setTimeout(resolve, this.pauseMs));
        options.signal?.throwIfAborted();
        options.onProgress?.((y + 1) / region.heightPx, 'body');
      }
      return body;
    } catch (error) {
      this.paintingsAborted += 1;
      throw error;
    } finally {
      this.paintingsEnded += 1;
    }
  }
}

const noTimes = () => ({ grainMs: 0, bodyMs: 0, lineMs: 0, reliefMs: 0, composeMs: 0 });

function sample(picture: DecodedPhoto, x: number, y: number, channel: number): number {
  const column = Math.min(picture.widthPx - 1, Math.max(0, x));
  const row = Math.min(picture.heightPx - 1, Math.max(0, y));
  return picture.pixels[(row * picture.widthPx + column) * picture.channels + channel];
}

function blurRow(picture: DecodedPhoto, region: Rect, y: number, reachPx: number, body: Uint16Array): void {
  const most = picture.pixels instanceof Uint16Array ? 65535 : 255;
  for (let x = 0; x < region.widthPx; x += 1)
    for (let channel = 0; channel < 3; channel += 1) {
      let sum = 0;
      for (let dx = -reachPx; dx <= reachPx; dx += 1)
        sum += sample(picture, region.xPx + x + dx, region.yPx + y, channel);
      body[(y * region.widthPx + x) * 3 + channel] = Math.round((sum / (2 * reachPx + 1) / most) * 65535);
    }
}

function halve(picture: DecodedPhoto): DecodedPhoto {
  const widthPx = Math.ceil(picture.widthPx / 2);
  const heightPx = Math.ceil(picture.heightPx / 2);
  const { channels } = picture;
  const scale = picture.pixels instanceof Uint16Array ? 257 : 1;
  const pixels = new Uint8Array(widthPx * heightPx * channels);
  for (let y = 0; y < heightPx; y += 1)
    for (let x = 0; x < widthPx; x += 1)
      for (let c = 0; c < channels; c += 1) {
        let sum = 0;
        for (let i = 0; i < 4; i += 1) sum += sample(picture, 2 * x + (i & 1), 2 * y + (i >> 1), c);
        pixels[(y * widthPx + x) * channels + c] = Math.round(sum / 4 / scale);
      }
  return { widthPx, heightPx, channels, pixels };
}

function crop(picture: DecodedPhoto, region: Rect): Uint8Array | Uint16Array {
  const rows = Array.from({ length: region.heightPx }, (_, y) => {
    const start = ((region.yPx + y) * picture.widthPx + region.xPx) * picture.channels;
    return picture.pixels.subarray(start, start + region.widthPx * picture.channels);
  });
  const Samples = picture.pixels.constructor as Uint8ArrayConstructor;
  const cropped = new Samples(region.widthPx * region.heightPx * picture.channels);
  for (const [y, row] of rows.entries()) cropped.set(row, y * row.length);
  return cropped;
}
