import { fitScale, maxScale, type Point, panBy, zoomAt } from '../geometry/viewTransform.ts';
import { photoStore } from '../state/photoStore.ts';
import { changeView, placedViewStore, viewStore } from '../state/viewStore.ts';
import { fitMargin } from './stageMeasures.ts';

/** Moves the picture by device pixels. */
export function panPicture(delta: Point): void {
  const photo = photoStore.get();
  const placed = placedViewStore.get();
  if (!photo || !placed) return;
  changeView({ intent: panBy(placed, delta, photo, viewStore.get().stage) });
}

/** Zooms with the point under `anchor` (device pixels of the stage) kept where it is. */
export function zoomPicture(scale: number, anchor: Point): void {
  const photo = photoStore.get();
  const placed = placedViewStore.get();
  if (!photo || !placed) return;
  const { stage, devicePixelRatio } = viewStore.get();
  const min = Math.min(1, fitScale(photo, stage, fitMargin(devicePixelRatio))) / 2;
  changeView({ intent: zoomAt(placed, anchor, scale, photo, stage, { min, max: maxScale }) });
}

export function fitPicture(): void {
  changeView({ intent: { kind: 'fit' } });
}

/** One photo pixel on one device pixel, about the middle of what is in view. */
export function showFullSize(): void {
  const { stage } = viewStore.get();
  zoomPicture(1, { x: stage.widthPx / 2, y: stage.heightPx / 2 });
}
