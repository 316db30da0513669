/**
 * Where the picture stands on the stage. A **source point** is in pixels of the full-resolution photo, a
 * **view point** in device pixels of the stage. A scale of 1 shows one photo pixel on one device pixel.
 */

export interface Size {
  widthPx: number;
  heightPx: number;
}

export interface Point {
  x: number;
  y: number;
}

/** What the user asked for; it survives a change of the stage's size. */
export type ViewIntent = { kind: 'fit' } | { kind: 'free'; scale: number; centre: Point };

/** The intent placed on a stage: view = source · scale + origin, with a whole-pixel origin. */
export interface PlacedView {
  scale: number;
  originXPx: number;
  originYPx: number;
}

/** Space kept around a fitted picture, in device pixels. */
export interface FitMargin {
  sidePx: number;
  topPx: number;
  bottomPx: number;
}

export const maxScale = 16;

export function fitScale(photo: Size, stage: Size, margin: FitMargin): number {
  const across = (stage.widthPx - 2 * margin.sidePx) / photo.widthPx;
  const down = (stage.heightPx - margin.topPx - margin.bottomPx) / photo.heightPx;
  return Math.max(1e-4, Math.min(across, down, maxScale));
}

/** The origin is rounded, so that at a scale of 1 every photo pixel falls on exactly one device pixel. */
export function placeView(intent: ViewIntent, photo: Size, stage: Size, margin: FitMargin): PlacedView {
  if (intent.kind === 'fit') {
    const scale = fitScale(photo, stage, margin);
    const freeHeightPx = stage.heightPx - margin.topPx - margin.bottomPx;
    return {
      scale,
      originXPx: Math.round((stage.widthPx - photo.widthPx * scale) / 2),
      originYPx: Math.round(margin.topPx + (freeHeightPx - photo.heightPx * scale) / 2),
    };
  }
  return {
    scale: intent.scale,
    originXPx: Math.round(stage.widthPx / 2 - intent.centre.x * intent.scale),
    originYPx: Math.round(stage.heightPx / 2 - intent.centre.y * intent.scale),
  };
}

export function toView(view: PlacedView, source: Point): Point {
  return { x: source.x * view.scale + view.originXPx, y: source.y * view.scale + view.originYPx };
}

export function toSource(view: PlacedView, point: Point): Point {
  return { x: (point.x - view.originXPx) / view.scale, y: (point.y - view.originYPx) / view.scale };
}

/** The middle of the stage never leaves the picture, so that the picture cannot be lost. */
function keepInside(centre: Point, photo: Size): Point {
  return {
    x: Math.min(Math.max(centre.x, 0), photo.widthPx),
    y: Math.min(Math.max(centre.y, 0), photo.heightPx),
  };
}

/**
 * Changes the scale while the source point under `anchor` stays where it is.
 * @param limits smallest and largest scale allowed
 */
export function zoomAt(
  view: PlacedView,
  anchor: Point,
  scale: number,
  photo: Size,
  stage: Size,
  limits: { min: number; max: number },
): ViewIntent {
  const wanted = Math.min(Math.max(scale, limits.min), limits.max);
  const held = toSource(view, anchor);
  const centre = {
    x: held.x + (stage.widthPx / 2 - anchor.x) / wanted,
    y: held.y + (stage.heightPx / 2 - anchor.y) / wanted,
  };
  return { kind: 'free', scale: wanted, centre: keepInside(centre, photo) };
}

/** Moves the picture by device pixels. */
export function panBy(view: PlacedView, delta: Point, photo: Size, stage: Size): ViewIntent {
  const centre = toSource(view, { x: stage.widthPx / 2 - delta.x, y: stage.heightPx / 2 - delta.y });
  return { kind: 'free', scale: view.scale, centre: keepInside(centre, photo) };
}

/** The steps of the zoom keys: halves and doubles with one stop between. */
export function nextScale(scale: number, direction: 1 | -1): number {
  const step = Math.log2(scale) * 2;
  const next = direction > 0 ? Math.floor(step + 1.0001) : Math.ceil(step - 1.0001);
  return 2 ** (next / 2);
}
