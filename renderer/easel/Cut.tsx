import { type KeyboardEvent, type PointerEvent, useRef } from 'react';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { cutViewY } from '../geometry/sectionLayout.ts';
import { toSource } from '../geometry/viewTransform.ts';
import { useStore } from '../state/store.ts';
import { changeView, placedViewStore, viewStore } from '../state/viewStore.ts';

/** How far out a handle stands, and how near the stage's edge it may come. */
const handleReachPx = 32;
const handleInsetPx = 4;

/** Hairline across the picture: the Section below shows what lies along it. */
export function Cut({ photo }: { photo: OpenedPhoto }) {
  const placed = useStore(placedViewStore);
  const { cut01, stage, devicePixelRatio: ratio } = useStore(viewStore);
  const line = useRef<HTMLDivElement>(null);
  if (!placed) return null;
  const yPx = cutViewY(cut01, placed, photo) / ratio;
  const leftPx = Math.max(0, placed.originXPx / ratio);
  const rightPx = Math.min(stage.widthPx, placed.originXPx + photo.widthPx * placed.scale) / ratio;
  // Beside the picture where there is room, else just inside the stage's edge.
  const reachLeftPx = Math.min(handleReachPx, leftPx - handleInsetPx);
  const reachRightPx = Math.min(handleReachPx, stage.widthPx / ratio - rightPx - handleInsetPx);
  const percent = Math.round(cut01 * 100);

  const moveTo = (clientY: number) => {
    const box = line.current?.parentElement?.getBoundingClientRect();
    if (!box) return;
    const source = toSource(placed, { x: 0, y: (clientY - box.top) * ratio });
    setCut(source.y / photo.heightPx);
  };
  const onPointerDown = (event: PointerEvent<HTMLElement>) => {
    event.currentTarget.setPointerCapture(event.pointerId);
    event.stopPropagation();
  };
  const onPointerMove = (event: PointerEvent<HTMLElement>) => {
    if (event.currentTarget.hasPointerCapture(event.pointerId)) moveTo(event.clientY);
  };
  const onKeyDown = (event: KeyboardEvent) => {
    const row = 1 / photo.heightPx;
    const step = event.shiftKey ? 0.05 : Math.max(row, 1 / (photo.heightPx * placed.scale));
    const next: Record<string, number> = {
      ArrowUp: cut01 - step,
      ArrowLeft: cut01 - step,
      ArrowDown: cut01 + step,
      ArrowRight: cut01 + step,
      PageUp: cut01 - 0.05,
      PageDown: cut01 + 0.05,
      Home: 0,
      End: 1,
    };
    if (!(event.key in next)) return;
    setCut(next[event.key]);
    event.preventDefault();
    event.stopPropagation();
  };
  const isOut = yPx < 0 || yPx > stage.heightPx / ratio;
  return (
    <div
      ref={line}
      className={isOut ? 'cut cut-out' : 'cut'}
      style={{ top: `${yPx}px`, left: `${leftPx}px`, width: `${Math.max(0, rightPx - leftPx)}px` }}
    >
      <div
        className="cut-grip"
        aria-hidden="true"
        onPointerDown={onPointerDown}
        onPointerMove={onPointerMove}
      />
      <div
        className="cut-handle"
        style={{ left: `${-reachLeftPx}px` }}
        role="slider"
        tabIndex={0}
        title="The cut: drag it, or use the arrow keys"
        aria-label="Cut"
        aria-orientation="vertical"
        aria-valuemin={0}
        aria-valuemax={100}
        aria-valuenow={percent}
        aria-valuetext={`${percent} percent down the picture`}
        onPointerDown={onPointerDown}
        onPointerMove={onPointerMove}
        onKeyDown={onKeyDown}
      />
      <div
        className="cut-handle"
        style={{ right: `${-reachRightPx}px` }}
        aria-hidden="true"
        onPointerDown={onPointerDown}
        onPointerMove={onPointerMove}
      />
    </div>
  );
}

function setCut(cut01: number): void {
  changeView({ cut01: Math.min(1, Math.max(0, cut01)) });
}
