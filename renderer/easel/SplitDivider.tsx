import { type KeyboardEvent, type PointerEvent, useRef } from 'react';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { toSource } from '../geometry/viewTransform.ts';
import { comparisonStore } from '../state/memoryStore.ts';
import { useStore } from '../state/store.ts';
import { changeView, placedViewStore, viewStore } from '../state/viewStore.ts';
import { nameOfSide } from '../states/comparing.ts';

/** Photograph to its left, painting to its right; or two states that are compared. */
export function SplitDivider({ photo }: { photo: OpenedPhoto }) {
  const placed = useStore(placedViewStore);
  const { split01, stage, devicePixelRatio: ratio } = useStore(viewStore);
  const comparison = useStore(comparisonStore);
  const divider = useRef<HTMLDivElement>(null);
  if (!placed || split01 === null) return null;
  const leftName = comparison ? nameOfSide(comparison.left) : 'photograph';
  const rightName = comparison ? nameOfSide(comparison.right) : 'painting';
  const xPx = (placed.originXPx + Math.round(Math.round(photo.widthPx * placed.scale) * split01)) / ratio;
  const topPx = Math.max(0, placed.originYPx / ratio);
  const bottomPx = Math.min(stage.heightPx, placed.originYPx + photo.heightPx * placed.scale) / ratio;
  const percent = Math.round(split01 * 100);
  const set = (next: number) => changeView({ split01: Math.min(1, Math.max(0, next)) });

  const onPointerMove = (event: PointerEvent<HTMLElement>) => {
    if (!event.currentTarget.hasPointerCapture(event.pointerId)) return;
    const box = divider.current?.parentElement?.getBoundingClientRect();
    if (box) set(toSource(placed, { x: (event.clientX - box.left) * ratio, y: 0 }).x / photo.widthPx);
  };
  const onKeyDown = (event: KeyboardEvent) => {
    const step = event.shiftKey ? 0.1 : 0.01;
    const next: Record<string, number> = {
      ArrowLeft: split01 - step,
      ArrowDown: split01 - step,
      ArrowRight: split01 + step,
      ArrowUp: split01 + step,
      Home: 0,
      End: 1,
    };
    if (!(event.key in next)) return;
    set(next[event.key]);
    event.preventDefault();
    event.stopPropagation();
  };
  return (
    <div
      ref={divider}
      className="split"
      style={{ left: `${xPx}px`, top: `${topPx}px`, height: `${Math.max(0, bottomPx - topPx)}px` }}
      role="slider"
      tabIndex={0}
      title={`${upperFirst(leftName)} to the left, ${rightName} to the right: drag, or use the arrow keys`}
      aria-label={`Split between ${leftName} and ${rightName}`}
      aria-orientation="horizontal"
      aria-valuemin={0}
      aria-valuemax={100}
      aria-valuenow={percent}
      aria-valuetext={`${leftName} on ${percent} percent of the width`}
      onPointerDown={(event) => {
        event.currentTarget.setPointerCapture(event.pointerId);
        event.stopPropagation();
      }}
      onPointerMove={onPointerMove}
      onKeyDown={onKeyDown}
    >
      <span className="split-name split-name-left" aria-hidden="true">
        {leftName}
      </span>
      <span className="split-name split-name-right" aria-hidden="true">
        {rightName}
      </span>
    </div>
  );
}

function upperFirst(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}
