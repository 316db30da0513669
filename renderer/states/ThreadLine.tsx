import { type PlacedState, ringPx, ringWidthPx, threadWidthPx, toRem, xOf } from './threadLayout.ts';

interface LineProps {
  placed: readonly PlacedState[];
  count: number;
  /** Where the state on the easel stands, for the thread that leads to work nobody kept; null without such work. */
  unkeptFrom: number | null;
}

const heightPx = 48;
const lineYPx = 26;
const radiusPx = ringPx / 2;

/**
 * The line that the numerals stand on. An arc leads over the states between, from a state to a follower that does not
 * stand beside it; a dashed one to what nobody has kept yet.
 */
export function ThreadLine({ placed, count, unkeptFrom }: LineProps) {
  const first = placed[0]?.xPx ?? 0;
  const last = placed.at(-1)?.xPx ?? 0;
  const widthPx = threadWidthPx(count);
  return (
    <svg
      className="thread-line"
      viewBox={`0 0 ${widthPx} ${heightPx}`}
      style={{ width: toRem(widthPx), height: toRem(heightPx) }}
      aria-hidden="true"
    >
      <line x1={first} x2={last} y1={lineYPx} y2={lineYPx} />
      {placed.map(
        ({ state, xPx, fromXPx }) =>
          fromXPx !== null && <path key={state.id} d={arc(fromXPx, xPx, lineYPx - radiusPx, 1)} />,
      )}
      {unkeptFrom !== null && (
        <path
          className="thread-unkept-line"
          d={
            unkeptFrom === count - 1
              ? `M ${xOf(unkeptFrom) + ringWidthPx(count) / 2} ${lineYPx} H ${xOf(count) - radiusPx}`
              : arc(xOf(unkeptFrom), xOf(count), lineYPx + radiusPx, -1)
          }
        />
      )}
    </svg>
  );
}

/** Up over the line, or down under it, and no further than the row is high. */
function arc(fromX: number, toX: number, y: number, up: 1 | -1): string {
  const corner = Math.min(12, (toX - fromX) / 3);
  const top = y - up * 7;
  return `M ${fromX} ${y} Q ${fromX} ${top} ${fromX + corner} ${top} H ${toX - corner} Q ${toX} ${top} ${toX} ${y}`;
}
