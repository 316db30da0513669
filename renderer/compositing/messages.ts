import type { Parameters } from '../../core/parameters/table.ts';
import type { Rect, Strata } from '../../core/pixels/photo.ts';
import type { BandPlace } from '../geometry/sectionLayout.ts';
import type { PlacedView, Size } from '../geometry/viewTransform.ts';

/** How a photo's numbers come to the canvas: through a table where there is one, and then in which space they are. */
export interface WayToScreen {
  table: Uint16Array | null;
  space: PredefinedColorSpace;
}

/** Everything the compositing worker needs to draw one frame. Lengths are device pixels. */
export interface Scene {
  id: number;
  photo: Size;
  stage: Size;
  section: Size;
  view: PlacedView;
  parameters: Parameters;
  bare: boolean;
  split01: number | null;
  cut01: number;
  bands: BandPlace[];
  bandSpan: { leftPx: number; rightPx: number };
  /** The pieces to draw, the lowest first. */
  shown: readonly PieceSlot[];
  /** What stands on the left of the split; null for the photo alone. */
  left: { parameters: Parameters; shown: readonly PieceSlot[] } | null;
  /** The screen's pixel ratio, for strokes over what print cannot show; null for no strokes. */
  hatchRatio: number | null;
  /** What will be printed of the photo, in its pixels. */
  crop: Rect;
}

/** Strata of a level or of a part of it, as the host painted them. */
export interface PaintedPiece {
  level: number;
  region: Rect;
  /** Without the ground where the slot already holds the same one. */
  strata: Omit<Strata, 'ground'> & { ground: Strata['ground'] | null };
}

/**
 * `rough` and `base` cover the whole picture, the one while the other is being painted; `detail` is what is in
 * view when zoomed in, laid over them.
 */
export type PieceSlot = 'rough' | 'base' | 'detail';

/** Two sets of pieces: what lies on the easel, and what it is compared with on the left of the split. */
export type SceneSide = 'easel' | 'left';

export type ToCompositor =
  /** @param space that of the canvases, for as long as the window lives */
  | { kind: 'start'; picture: OffscreenCanvas; section: OffscreenCanvas; space: PredefinedColorSpace }
  | { kind: 'piece'; side: SceneSide; slot: PieceSlot; piece: PaintedPiece }
  | { kind: 'dropPiece'; side: SceneSide; slot: PieceSlot }
  | { kind: 'screen'; way: WayToScreen }
  /** What a print makes of the photo's colours, for `markOutside`; null where nothing is marked. */
  | { kind: 'gamut'; table: Uint16Array | null }
  | { kind: 'scene'; scene: Scene };

export type FromCompositor =
  | { kind: 'ready' }
  | { kind: 'drawn'; sceneId: number; frameMs: number; composed: boolean }
  /** How much of what is printed lies outside of what the print can show; null while it is not known. */
  | { kind: 'outside'; share01: number | null }
  /** Memory that a piece came in, to be used again. */
  | { kind: 'spent'; buffer: ArrayBuffer }
  | { kind: 'failed'; message: string };
