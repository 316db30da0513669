import { type KeyboardEvent, type PointerEvent, useEffect, useRef } from 'react';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { nextScale, type Point } from '../geometry/viewTransform.ts';
import { CropOverlay } from '../print/CropOverlay.tsx';
import { lookStore } from '../state/lookStore.ts';
import { useStore } from '../state/store.ts';
import { changeView, placedViewStore, viewStore } from '../state/viewStore.ts';
import { compare, stateDragType } from '../states/comparing.ts';
import { Cut } from './Cut.tsx';
import { SplitDivider } from './SplitDivider.tsx';
import { StageFoot } from './StageFoot.tsx';
import { panPicture, zoomPicture } from './viewMoves.ts';
import { WorkSign } from './WorkSign.tsx';

/** Wheel notches and pinches become factors through this. */
const wheelZoomRate = 0.0022;
const pinchZoomRate = 0.012;
const arrowPanPx = 64;

interface StageProps {
  photo: OpenedPhoto;
  canvasHost: (element: HTMLDivElement | null) => void;
}

/** The picture on its grey, with the cut across it. */
export function Stage({ photo, canvasHost }: StageProps) {
  const stage = useRef<HTMLElement>(null);
  const surround = useStore(viewStore, (view) => view.surround);
  const placed = useStore(placedViewStore);
  const ratio = useStore(viewStore, (view) => view.devicePixelRatio);
  useStageSize(stage);
  useWheel(stage);
  const drag = useRef<Point | null>(null);

  const onPointerDown = (event: PointerEvent<HTMLElement>) => {
    if (event.button !== 0 && event.button !== 1) return;
    drag.current = { x: event.clientX, y: event.clientY };
    event.currentTarget.setPointerCapture(event.pointerId);
  };
  const onPointerMove = (event: PointerEvent<HTMLElement>) => {
    if (!drag.current) return;
    const delta = {
      x: (event.clientX - drag.current.x) * ratio,
      y: (event.clientY - drag.current.y) * ratio,
    };
    drag.current = { x: event.clientX, y: event.clientY };
    panPicture(delta);
  };
  const endDrag = () => {
    drag.current = null;
  };
  const onKeyDown = (event: KeyboardEvent<HTMLElement>) => {
    if (event.target !== event.currentTarget) return;
    const moves: Record<string, Point> = {
      ArrowLeft: { x: arrowPanPx, y: 0 },
      ArrowRight: { x: -arrowPanPx, y: 0 },
      ArrowUp: { x: 0, y: arrowPanPx },
      ArrowDown: { x: 0, y: -arrowPanPx },
    };
    const move = moves[event.key];
    if (!move || event.ctrlKey || event.metaKey || event.altKey) return;
    panPicture({ x: move.x * ratio, y: move.y * ratio });
    event.preventDefault();
  };
  return (
    <section className={`stage stage-${surround}`} aria-label="Picture">
      <section
        ref={stage}
        className="stage-hold"
        data-view={placed ? `${placed.scale} ${placed.originXPx} ${placed.originYPx}` : undefined}
        // biome-ignore lint/a11y/noNoninteractiveTabindex: the picture is moved with the arrow keys
        tabIndex={0}
        aria-label={`${photo.name}, painted, at ${Math.round((placed?.scale ?? 1) * 100)} percent. Arrow keys move the picture, plus and minus zoom.`}
        onPointerDown={onPointerDown}
        onPointerMove={onPointerMove}
        onPointerUp={endDrag}
        onPointerCancel={endDrag}
        onKeyDown={onKeyDown}
        onDragOver={(event) => {
          if (event.dataTransfer.types.includes(stateDragType)) event.preventDefault();
        }}
        onDrop={(event) => dropState(event.dataTransfer.getData(stateDragType))}
      >
        <div className="stage-canvas" ref={canvasHost} />
        <CropOverlay photo={photo} />
      </section>
      <Cut photo={photo} />
      <SplitDivider photo={photo} />
      <WorkSign />
      <StageFoot photo={photo} />
    </section>
  );
}

/** A state dropped on the picture is compared with it. */
function dropState(stateId: string): void {
  const preset = lookStore.get()?.present.presetId;
  if (stateId && preset) compare({ kind: 'state', preset, stateId });
}

/** Keeps the stage's size in device pixels. */
function useStageSize(stage: React.RefObject<HTMLElement | null>): void {
  useEffect(() => {
    const element = stage.current;
    if (!element) return;
    const measure = () => {
      const devicePixelRatio = window.devicePixelRatio;
      changeView({
        devicePixelRatio,
        stage: {
          widthPx: Math.round(element.clientWidth * devicePixelRatio),
          heightPx: Math.round(element.clientHeight * devicePixelRatio),
        },
      });
    };
    const observer = new ResizeObserver(measure);
    observer.observe(element);
    // A window dragged to another screen keeps its size and changes its ratio.
    const ratioQuery = matchMedia(`(resolution: ${window.devicePixelRatio}dppx)`);
    ratioQuery.addEventListener('change', measure);
    measure();
    return () => {
      observer.disconnect();
      ratioQuery.removeEventListener('change', measure);
    };
  }, [stage]);
}

/** A mouse wheel zooms at the pointer; two fingers on a trackpad pan, a pinch zooms. */
function useWheel(stage: React.RefObject<HTMLElement | null>): void {
  useEffect(() => {
    const element = stage.current;
    if (!element) return;
    const onWheel = (event: WheelEvent) => {
      event.preventDefault();
      const { devicePixelRatio } = viewStore.get();
      const placed = placedViewStore.get();
      if (!placed) return;
      const box = element.getBoundingClientRect();
      const anchor = {
        x: (event.clientX - box.left) * devicePixelRatio,
        y: (event.clientY - box.top) * devicePixelRatio,
      };
      if (event.ctrlKey) zoomPicture(placed.scale * Math.exp(-event.deltaY * pinchZoomRate), anchor);
      else if (isTrackpad(event))
        panPicture({ x: -event.deltaX * devicePixelRatio, y: -event.deltaY * devicePixelRatio });
      else {
        const notch = event.deltaMode === WheelEvent.DOM_DELTA_LINE ? event.deltaY * 33 : event.deltaY;
        zoomPicture(placed.scale * Math.exp(-notch * wheelZoomRate), anchor);
      }
    };
    element.addEventListener('wheel', onWheel, { passive: false });
    return () => element.removeEventListener('wheel', onWheel);
  }, [stage]);
}

/** Mouse wheels turn by whole notches in one direction; fingers move by small, often slanting amounts. */
function isTrackpad(event: WheelEvent): boolean {
  if (event.deltaMode !== WheelEvent.DOM_DELTA_PIXEL) return false;
  return event.deltaX !== 0 || Math.abs(event.deltaY) < 40 || !Number.isInteger(event.deltaY);
}

/** For the zoom keys: the next stop about the middle of the stage. */
export function zoomByKey(direction: 1 | -1): void {
  const placed = placedViewStore.get();
  const { stage } = viewStore.get();
  if (!placed) return;
  zoomPicture(nextScale(placed.scale, direction), { x: stage.widthPx / 2, y: stage.heightPx / 2 });
}
