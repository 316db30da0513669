import type { Parameters, Stratum } from '../../core/parameters/table.ts';
import type { Rect, Strata } from '../../core/pixels/photo.ts';
import type { PlacedView } from '../geometry/viewTransform.ts';
import { type StripPlace, writeStrip } from './bandStrip.ts';
import type { Composer, HeldStrata } from './composer.ts';
import type { PaintedPiece } from './messages.ts';

/**
 * One painted piece, held ready for composition, with its composed picture. The picture is composed again only
 * when one of the values that composition reads has changed.
 */
export class PictureSheet {
  readonly level: number;
  readonly region: Rect;
  readonly held: HeldStrata;
  private readonly painted: ComposedPicture;
  private bare: ComposedPicture | null = null;
  private strips: Map<Stratum, Strip>;

  /** @param old the sheet that this one takes the place of: a canvas of the same size is used again */
  constructor(
    piece: Pick<PaintedPiece, 'level' | 'region'>,
    strata: Strata,
    composer: Composer,
    old: PictureSheet | undefined,
  ) {
    this.level = piece.level;
    this.region = piece.region;
    this.held = composer.hold(strata);
    this.painted = new ComposedPicture(this.held, old?.painted.takeSurface(strata));
    this.strips = old?.takeStrips() ?? new Map();
  }

  /** @returns whether anything had to be composed */
  composePaint(parameters: Parameters): boolean {
    return this.painted.compose(parameters);
  }

  get paintedCanvas(): OffscreenCanvas {
    return this.painted.canvas;
  }

  /** The photo alone: all paint lifted off, no paper over it. */
  bareCanvas(parameters: Parameters): OffscreenCanvas {
    this.bare ??= new ComposedPicture(this.held, undefined);
    this.bare.compose({
      ...parameters,
      'ground.paper': 0,
      'body.strength': 0,
      'line.strength': 0,
      'relief.strength': 0,
    });
    return this.bare.canvas;
  }

  /** A stratum's own pixels along the cut, made again only when something else is asked for. */
  strip(stratum: Stratum, place: StripPlace, inkColour: string): OffscreenCanvas {
    const { firstRow, rowCount, firstColumn, columnCount } = place;
    const key = [firstRow, rowCount, firstColumn, columnCount, stratum === 'line' ? inkColour : ''].join();
    let strip = this.strips.get(stratum);
    const { space } = this.held;
    if (!strip?.fits(columnCount, rowCount, space)) {
      strip?.giveBack();
      strip = new Strip(columnCount, rowCount, space);
      this.strips.set(stratum, strip);
    }
    if (strip.key !== key) {
      writeStrip(this.held.strata, stratum, place, inkColour, strip.pixels.data);
      if (isInPhotoColours(stratum)) this.held.toScreen(strip.pixels.data);
      strip.context.putImageData(strip.pixels, 0, 0);
      strip.key = key;
    }
    return strip.canvas;
  }

  /** The way of colours to the screen has changed: everything is made again when it is next shown. */
  colourAgain(): void {
    this.painted.forget();
    this.bare?.forget();
    for (const strip of this.strips.values()) strip.key = '';
  }

  /** Gives its strips away as so much paper to write on. */
  private takeStrips(): Map<Stratum, Strip> {
    const { strips } = this;
    this.strips = new Map();
    for (const strip of strips.values()) strip.key = '';
    return strips;
  }

  /** Where the piece lies in a view, in device pixels. */
  place(view: PlacedView): { x: number; y: number; width: number; height: number; magnification: number } {
    const magnification = 2 ** this.level * view.scale;
    return {
      x: view.originXPx + this.region.xPx * magnification,
      y: view.originYPx + this.region.yPx * magnification,
      width: this.region.widthPx * magnification,
      height: this.region.heightPx * magnification,
      magnification,
    };
  }

  release(): void {
    this.painted.release();
    this.bare?.release();
    for (const strip of this.strips.values()) strip.giveBack();
    this.held.release();
  }
}

/** Ink is shown on a paper of the band's own, relief as grey light. */
function isInPhotoColours(stratum: Stratum): boolean {
  return stratum === 'ground' || stratum === 'body';
}

/** A band's pixels, with the key of what is written on it. */
class Strip {
  readonly canvas: OffscreenCanvas;
  readonly context: OffscreenCanvasRenderingContext2D;
  readonly pixels: ImageData;
  key = '';

  constructor(columnCount: number, rowCount: number, colorSpace: PredefinedColorSpace) {
    this.canvas = new OffscreenCanvas(columnCount, rowCount);
    this.context = this.canvas.getContext('2d', { willReadFrequently: true, colorSpace })!;
    this.pixels = new ImageData(columnCount, rowCount, { colorSpace });
  }

  fits(columnCount: number, rowCount: number, space: PredefinedColorSpace): boolean {
    const { width, height, colorSpace } = this.pixels;
    return width === columnCount && height === rowCount && colorSpace === space;
  }

  giveBack(): void {
    this.canvas.width = 0;
  }
}

/** What a picture is composed on: written at every move of a strength, so kept in main memory. */
interface Surface {
  canvas: OffscreenCanvas;
  context: OffscreenCanvasRenderingContext2D;
  pixels: ImageData;
}

function createSurface({ strata: { widthPx, heightPx }, space: colorSpace }: HeldStrata): Surface {
  const canvas = new OffscreenCanvas(widthPx, heightPx);
  const context = canvas.getContext('2d', { willReadFrequently: true, colorSpace })!;
  return { canvas, context, pixels: new ImageData(widthPx, heightPx, { colorSpace }) };
}

class ComposedPicture {
  private surface: Surface | null;
  private composedFor = '';

  constructor(
    private readonly held: HeldStrata,
    surface: Surface | undefined,
  ) {
    this.surface = surface ?? createSurface(held);
  }

  get canvas(): OffscreenCanvas {
    return this.surface!.canvas;
  }

  /** Gives the surface away where it fits; this picture is not composed again. */
  takeSurface({ widthPx, heightPx }: Strata): Surface | undefined {
    const { surface } = this;
    if (surface?.pixels.width !== widthPx || surface.pixels.height !== heightPx) return undefined;
    this.surface = null;
    return surface;
  }

  /** Gives the canvas's memory back at once; the collector knows nothing of its size. */
  release(): void {
    if (!this.surface) return;
    this.surface.canvas.width = 0;
    this.surface.canvas.height = 0;
    this.surface = null;
  }

  /** Composes again even where no value has changed. */
  forget(): void {
    this.composedFor = '';
  }

  compose(parameters: Parameters): boolean {
    const key = compositionKey(parameters);
    if (key === this.composedFor) return false;
    if (this.surface!.pixels.colorSpace !== this.held.space) {
      this.release();
      this.surface = createSurface(this.held);
    }
    const { pixels, context } = this.surface!;
    this.held.compose(parameters, pixels.data);
    context.putImageData(pixels, 0, 0);
    this.composedFor = key;
    return true;
  }
}

/** The values that composition reads; all others are already in the strata. */
export function compositionKey(parameters: Parameters): string {
  return [
    parameters['ground.paper'],
    parameters['ground.colour'],
    parameters['body.strength'],
    parameters['relief.strength'],
    parameters['line.strength'],
    parameters['line.blend'],
    parameters['line.colour'],
  ].join('|');
}
