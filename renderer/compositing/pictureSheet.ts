import type { Parameters, Stratum } from '../../core/parameters/table.ts';
import type { Rect, Strata } from '../../core/pixels/photo.ts';
import type { PlacedView } from '../geometry/viewTransform.ts';
import { type StripPlace, stripPixels } from './bandStrip.ts';
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
  private readonly strips = new Map<Stratum, { key: string; canvas: OffscreenCanvas }>();

  constructor(piece: Pick<PaintedPiece, 'level' | 'region'>, strata: Strata, composer: Composer) {
    this.level = piece.level;
    this.region = piece.region;
    this.held = composer.hold(strata);
    this.painted = new ComposedPicture(this.held);
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
    this.bare ??= new ComposedPicture(this.held);
    this.bare.compose({ ...parameters, 'ground.paper': 0, 'body.strength': 0, 'line.strength': 0 });
    return this.bare.canvas;
  }

  /** A stratum's own pixels along the cut, made again only when something else is asked for. */
  strip(stratum: Stratum, place: StripPlace, inkColour: string): OffscreenCanvas {
    const { firstRow, rowCount, firstColumn, columnCount } = place;
    const key = [firstRow, rowCount, firstColumn, columnCount, stratum === 'line' ? inkColour : ''].join();
    const held = this.strips.get(stratum);
    if (held?.key === key) return held.canvas;
    const canvas = held?.canvas ?? new OffscreenCanvas(1, 1);
    if (canvas.width < columnCount) canvas.width = columnCount;
    if (canvas.height < rowCount) canvas.height = rowCount;
    const pixels = stripPixels(this.held.strata, stratum, place, inkColour);
    canvas.getContext('2d', { willReadFrequently: true })!.putImageData(pixels, 0, 0);
    this.strips.set(stratum, { key, canvas });
    return canvas;
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
    this.held.release();
  }
}

class ComposedPicture {
  readonly canvas: OffscreenCanvas;
  private readonly context: OffscreenCanvasRenderingContext2D;
  private readonly pixels: ImageData;
  private composedFor = '';

  constructor(private readonly held: HeldStrata) {
    const { widthPx, heightPx } = held.strata;
    this.canvas = new OffscreenCanvas(widthPx, heightPx);
    // Written with putImageData at every move of a strength: kept in main memory.
    this.context = this.canvas.getContext('2d', { willReadFrequently: true })!;
    this.pixels = new ImageData(widthPx, heightPx);
  }

  compose(parameters: Parameters): boolean {
    const key = compositionKey(parameters);
    if (key === this.composedFor) return false;
    this.held.compose(parameters, this.pixels.data);
    this.context.putImageData(this.pixels, 0, 0);
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
    parameters['line.strength'],
    parameters['line.blend'],
    parameters['line.colour'],
  ].join('|');
}
