import { type KeyboardEvent, type PointerEvent, useRef } from 'react';
import { type CropFrame, mmPerInch, trimMarkMm } from '../../core/print/printPlan.ts';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { changeOutput, useOutput } from '../app/outputWork.ts';
import { type Point, toView } from '../geometry/viewTransform.ts';
import { comparisonStore } from '../state/memoryStore.ts';
import { panelStore } from '../state/panelStore.ts';
import { useStore } from '../state/store.ts';
import { placedViewStore, viewStore } from '../state/viewStore.ts';
import { aspectInWords } from './cropAspects.ts';
import { freeAxis, moveAlong, moveFrame, placeAlong, placeInWords } from './cropMoves.ts';
import { planOf } from './printMeasures.ts';

interface Box {
  left: number;
  top: number;
  width: number;
  height: number;
}

/** While the print page is open: the cut of the paper over the picture, with bleed and marks; all in CSS pixels. */
export function CropOverlay({ photo }: { photo: OpenedPhoto }) {
  const isOpen = useStore(panelStore, (page) => page === 'print');
  const isComparing = useStore(comparisonStore, (comparison) => comparison !== null);
  const placed = useStore(placedViewStore);
  const { stage, devicePixelRatio: ratio } = useStore(viewStore);
  const output = useOutput();
  if (!isOpen || isComparing || !placed) return null;
  const plan = planOf(photo, output);
  const { crop } = plan;
  const corner = toView(placed, { x: crop.xPx, y: crop.yPx });
  const print: Box = {
    left: corner.x / ratio,
    top: corner.y / ratio,
    width: (crop.widthPx * placed.scale) / ratio,
    height: (crop.heightPx * placed.scale) / ratio,
  };
  const pxPerMm = Math.max(print.width, print.height) / Math.max(plan.widthMm, plan.heightMm);
  const bleed = (plan.margins.bleedPx / plan.ppi) * mmPerInch * pxPerMm;
  const frame = output.cropFrame ?? null;
  return (
    <>
      <svg
        className="crop-lines"
        width={stage.widthPx / ratio}
        height={stage.heightPx / ratio}
        aria-hidden="true"
      >
        {frame && <Dimmed photo={photo} placed={placed} ratio={ratio} print={print} />}
        <Outline box={print} className="crop-cut" />
        {bleed > 0 && <Outline box={grown(print, bleed)} className="crop-bleed" />}
        {plan.margins.marks && <Marks print={print} from={bleed} pxPerMm={pxPerMm} />}
      </svg>
      {frame && freeAxis(photo, frame) !== null && (
        <FrameHandle
          photo={photo}
          frame={frame}
          print={print}
          isAround={isAround(print, stage.widthPx / ratio, stage.heightPx / ratio)}
          pxPerPoint={placed.scale / ratio}
        />
      )}
    </>
  );
}

/** None of its edges is seen. */
function isAround({ left, top, width, height }: Box, stageWidth: number, stageHeight: number): boolean {
  return left <= 0 && top <= 0 && left + width >= stageWidth && top + height >= stageHeight;
}

function grown({ left, top, width, height }: Box, by: number): Box {
  return { left: left - by, top: top - by, width: width + 2 * by, height: height + 2 * by };
}

/** A light line in a dark one: seen on any tone. */
function Outline({ box, className }: { box: Box; className: string }) {
  const at = { x: box.left, y: box.top, width: Math.max(0, box.width), height: Math.max(0, box.height) };
  return (
    <g className={className}>
      <rect {...at} className="crop-under" />
      <rect {...at} className="crop-over" />
    </g>
  );
}

interface DimmedProps {
  photo: OpenedPhoto;
  placed: { scale: number; originXPx: number; originYPx: number };
  ratio: number;
  print: Box;
}

/** What of the picture is not printed. */
function Dimmed({ photo, placed, ratio, print }: DimmedProps) {
  const left = placed.originXPx / ratio;
  const top = placed.originYPx / ratio;
  const right = left + (photo.widthPx * placed.scale) / ratio;
  const bottom = top + (photo.heightPx * placed.scale) / ratio;
  const picture = `M${left} ${top}H${right}V${bottom}H${left}Z`;
  const inner = `M${print.left} ${print.top}v${print.height}h${print.width}v${-print.height}Z`;
  return <path className="crop-dim" d={`${picture}${inner}`} fillRule="evenodd" />;
}

function Marks({ print, from, pxPerMm }: { print: Box; from: number; pxPerMm: number }) {
  const reach = from + trimMarkMm.slug * pxPerMm;
  const start = reach - trimMarkMm.length * pxPerMm;
  const [right, bottom] = [print.left + print.width, print.top + print.height];
  const lines = [print.left, right].flatMap((x) => [
    `M${x} ${print.top - start}V${print.top - reach}`,
    `M${x} ${bottom + start}V${bottom + reach}`,
  ]);
  lines.push(
    ...[print.top, bottom].flatMap((y) => [
      `M${print.left - start} ${y}H${print.left - reach}`,
      `M${right + start} ${y}H${right + reach}`,
    ]),
  );
  const d = lines.join('');
  return (
    <g className="crop-marks">
      <path d={d} className="crop-under" />
      <path d={d} className="crop-over" />
    </g>
  );
}

interface FrameHandleProps {
  photo: OpenedPhoto;
  frame: CropFrame;
  print: Box;
  isAround: boolean;
  /** CSS pixels a pixel of the photo. */
  pxPerPoint: number;
}

/** Takes the frame by its inside; beside it, a drag still moves the picture. */
function FrameHandle({ photo, frame, print, isAround, pxPerPoint }: FrameHandleProps) {
  const held = useRef<{ from: Point; frame: CropFrame } | null>(null);
  const axis = freeAxis(photo, frame);
  const move = (next: CropFrame) => changeOutput({ cropFrame: { ...next } });
  const onPointerDown = (event: PointerEvent<HTMLElement>) => {
    if (event.button !== 0) return;
    event.currentTarget.setPointerCapture(event.pointerId);
    held.current = { from: { x: event.clientX, y: event.clientY }, frame };
    event.stopPropagation();
  };
  const onPointerMove = (event: PointerEvent<HTMLElement>) => {
    if (!held.current) return;
    const { from, frame: before } = held.current;
    const delta = { x: (event.clientX - from.x) / pxPerPoint, y: (event.clientY - from.y) / pxPerPoint };
    move(moveFrame(photo, before, delta));
    event.stopPropagation();
  };
  const onKeyDown = (event: KeyboardEvent) => {
    if (event.ctrlKey || event.metaKey || event.altKey) return;
    const step = event.shiftKey ? 16 / pxPerPoint : Math.max(1, 1 / pxPerPoint);
    const sign = { ArrowLeft: -1, ArrowUp: -1, ArrowRight: 1, ArrowDown: 1 }[event.key];
    const end = { Home: 0, End: 1 }[event.key];
    if (sign !== undefined) move(moveFrame(photo, frame, { x: sign * step, y: sign * step }));
    else if (end !== undefined) move(moveAlong(photo, frame, end));
    else return;
    event.preventDefault();
    event.stopPropagation();
  };
  return (
    <div
      className={`crop-frame crop-frame-${axis}${isAround ? ' crop-frame-around' : ''}`}
      style={{ left: print.left, top: print.top, width: print.width, height: print.height }}
      role="slider"
      tabIndex={0}
      title="The crop frame: drag it, or use the arrow keys"
      aria-label={`Crop frame of ${aspectInWords(frame.aspect)}`}
      aria-orientation={axis === 'x' ? 'horizontal' : 'vertical'}
      aria-valuemin={0}
      aria-valuemax={100}
      aria-valuenow={Math.round(placeAlong(photo, frame) * 100)}
      aria-valuetext={placeInWords(photo, frame)}
      onPointerDown={onPointerDown}
      onPointerMove={onPointerMove}
      onPointerUp={() => {
        held.current = null;
      }}
      onPointerCancel={() => {
        held.current = null;
      }}
      onKeyDown={onKeyDown}
    />
  );
}
