import { type KeyboardEvent, useEffect, useRef, useState } from 'react';
import { toRoman } from '../../core/presets/roman.ts';
import type { State } from '../../core/presets/state.ts';
import { partings } from '../../core/presets/thread.ts';
import type { PresetHistory } from '../../core/recipes/recipe.ts';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { returnTo } from '../app/memoryWork.ts';
import type { Look } from '../state/lookStore.ts';
import { comparisonStore } from '../state/memoryStore.ts';
import { createStore, useStore } from '../state/store.ts';
import { stateDragType } from './comparing.ts';
import { StateCard } from './StateCard.tsx';
import { type PlacedState, pitchPx, placeStates, threadWidthPx, xOf } from './threadLayout.ts';

interface ThreadProps {
  history: PresetHistory;
  look: Look;
  photo: OpenedPhoto;
  /** The easel holds changes that no state holds. */
  hasUnkeptWork: boolean;
}

/** Counts the calls of the key that brings the keyboard to the present state. */
export const threadCallStore = createStore(0);

const heightPx = 44;
const lineYPx = 26;

/** The states of the preset on the easel, in the order they were kept, as numerals on a line. */
export function StatesThread({ history, look, photo, hasUnkeptWork }: ThreadProps) {
  const { states } = history;
  const hold = useRef<HTMLDivElement>(null);
  const [shown, setShown] = useState({ leftPx: 0, widthPx: 800 });
  const [pointedId, setPointedId] = useState<string | null>(null);
  /** The state that the keyboard goes to. */
  const wanted = useRef<string | null>(null);
  const comparison = useStore(comparisonStore);
  const presentIndex = states.findIndex(({ id }) => id === look.stateId);
  useShown(hold, setShown);
  useEffect(() => scrollTo(hold.current, presentIndex), [presentIndex]);
  const placed = placeStates(states, shown.leftPx, shown.widthPx);
  const delivered = new Set(history.deliveries.map(({ stateId }) => stateId));
  const branches = branchNames(history);
  const pointed = states.find(({ id }) => id === pointedId);
  const pointedIndex = pointed ? states.indexOf(pointed) : -1;

  const focus = (index: number) => {
    const next = Math.min(states.length - 1, Math.max(0, index));
    scrollTo(hold.current, next);
    setPointedId(states[next].id);
    wanted.current = states[next].id;
  };
  const called = useStore(threadCallStore);
  const focusPresent = useRef(() => {});
  focusPresent.current = () => focus(presentIndex);
  const answered = useRef(called);
  useEffect(() => {
    if (called !== answered.current) focusPresent.current();
    answered.current = called;
  }, [called]);
  // A state that was out of view is there only after the next drawing.
  useEffect(() => {
    const button = hold.current?.querySelector<HTMLElement>(`[data-state="${wanted.current}"]`);
    if (!button) return;
    wanted.current = null;
    button.focus();
  });
  const onKeyDown = (event: KeyboardEvent) => {
    const from = pointedIndex >= 0 ? pointedIndex : presentIndex;
    const next: Record<string, number> = {
      ArrowLeft: from - 1,
      ArrowRight: from + 1,
      Home: 0,
      End: states.length - 1,
    };
    if (event.key === 'Escape') setPointedId(null);
    else if (event.key in next) focus(next[event.key]);
    else return;
    event.preventDefault();
    event.stopPropagation();
  };
  const isCompared = (state: State) =>
    comparison !== null &&
    [comparison.left, comparison.right].some((side) => side.kind === 'state' && side.stateId === state.id);
  return (
    <section
      className="thread"
      aria-label="States thread"
      onMouseLeave={() => setPointedId(null)}
      onBlur={(event) => {
        if (!event.currentTarget.contains(event.relatedTarget)) setPointedId(null);
      }}
    >
      <div
        ref={hold}
        className="thread-hold"
        role="toolbar"
        aria-label={`States of ${history.title}`}
        onKeyDown={onKeyDown}
      >
        <div className="thread-run" style={{ width: `${threadWidthPx(states.length)}px` }}>
          <ThreadLine
            placed={placed}
            count={states.length}
            hasUnkeptWork={hasUnkeptWork}
            presentIndex={presentIndex}
          />
          {placed.map(({ state, xPx }) => {
            const isPresent = state.id === look.stateId;
            return (
              <button
                key={state.id}
                type="button"
                className={[
                  'thread-state',
                  isPresent && 'is-present',
                  delivered.has(state.id) && 'is-delivered',
                  isCompared(state) && 'is-compared',
                ]
                  .filter(Boolean)
                  .join(' ')}
                style={{ left: `${xPx}px` }}
                data-state={state.id}
                tabIndex={state.id === (pointedId ?? look.stateId) ? 0 : -1}
                aria-current={isPresent ? 'true' : undefined}
                aria-label={nameOf(state, isPresent, delivered.has(state.id))}
                draggable
                onDragStart={(event) => {
                  event.dataTransfer.setData(stateDragType, state.id);
                  event.dataTransfer.effectAllowed = 'copy';
                  setPointedId(null);
                }}
                onMouseEnter={() => setPointedId(state.id)}
                onFocus={() => setPointedId(state.id)}
                onClick={() => setPointedId(state.id)}
                onDoubleClick={() => {
                  if (!isPresent || hasUnkeptWork) void returnTo(history.preset, state);
                }}
              >
                <span className="thread-numeral">{toRoman(state.number)}</span>
                {branches.has(state.id) && <span className="thread-branch">{branches.get(state.id)}</span>}
              </button>
            );
          })}
        </div>
      </div>
      {pointed && (
        <StateCard
          key={pointed.id}
          state={pointed}
          history={history}
          look={look}
          photo={photo}
          isDelivered={delivered.has(pointed.id)}
          branch={branches.get(pointed.id) ?? null}
          leftPx={xOf(pointedIndex) - shown.leftPx}
          threadWidthPx={shown.widthPx}
        />
      )}
    </section>
  );
}

function nameOf(state: State, isPresent: boolean, isDelivered: boolean): string {
  const facts = [isPresent && 'on the easel', isDelivered && 'delivered', state.note].filter(Boolean);
  return `State ${toRoman(state.number)}${facts.length > 0 ? `, ${facts.join(', ')}` : ''}`;
}

/** Names of the branches, by the state they begin with; the first follower goes on without one. */
function branchNames({ states, margins }: PresetHistory): Map<string, string> {
  const names = new Map<string, string>();
  for (const { followers } of partings(states, margins))
    for (const [at, { state, branch }] of followers.entries())
      if (at > 0 || margins[state.id]?.branch) names.set(state.id, branch);
  return names;
}

interface LineProps {
  placed: readonly PlacedState[];
  count: number;
  hasUnkeptWork: boolean;
  presentIndex: number;
}

/** The line that the numerals stand on; an arc leads from a state to a follower that does not stand beside it. */
function ThreadLine({ placed, count, hasUnkeptWork, presentIndex }: LineProps) {
  const first = placed[0]?.xPx ?? 0;
  const last = placed.at(-1)?.xPx ?? 0;
  const unkeptX = xOf(count);
  const isEndInView = placed.length > 0 && placed.at(-1)!.xPx === xOf(count - 1);
  return (
    <svg className="thread-line" width={threadWidthPx(count)} height={heightPx} aria-hidden="true">
      <line x1={first} x2={last} y1={lineYPx} y2={lineYPx} />
      {placed.map(
        ({ state, xPx, fromXPx }) =>
          fromXPx !== null && (
            <path
              key={state.id}
              d={`M ${fromXPx} ${lineYPx - 11} Q ${(fromXPx + xPx) / 2} -8 ${xPx} ${lineYPx - 11}`}
            />
          ),
      )}
      {hasUnkeptWork && isEndInView && (
        <g className="thread-unkept">
          <line x1={xOf(presentIndex)} x2={unkeptX - 7} y1={lineYPx + 13} y2={lineYPx + 1} />
          <circle cx={unkeptX} cy={lineYPx} r={7} />
        </g>
      )}
    </svg>
  );
}

/** Keeps what is in view of a thread longer than the window. */
function useShown(
  hold: React.RefObject<HTMLDivElement | null>,
  setShown: (shown: { leftPx: number; widthPx: number }) => void,
): void {
  useEffect(() => {
    const element = hold.current;
    if (!element) return;
    let isAwaited = false;
    const measure = () => {
      isAwaited = false;
      setShown({ leftPx: element.scrollLeft, widthPx: element.clientWidth });
    };
    const soon = () => {
      if (isAwaited) return;
      isAwaited = true;
      requestAnimationFrame(measure);
    };
    const onWheel = (event: WheelEvent) => {
      if (event.deltaX !== 0 || element.scrollWidth <= element.clientWidth) return;
      element.scrollLeft += event.deltaY;
      event.preventDefault();
    };
    const observer = new ResizeObserver(soon);
    observer.observe(element);
    element.addEventListener('scroll', soon, { passive: true });
    element.addEventListener('wheel', onWheel, { passive: false });
    measure();
    return () => {
      observer.disconnect();
      element.removeEventListener('scroll', soon);
      element.removeEventListener('wheel', onWheel);
    };
  }, [hold, setShown]);
}

/** Brings a state into view with a neighbour on either side. */
function scrollTo(hold: HTMLElement | null, index: number): void {
  if (!hold || index < 0) return;
  const x = xOf(index);
  const reach = 1.5 * pitchPx;
  if (x - reach < hold.scrollLeft) hold.scrollLeft = x - reach;
  else if (x + reach > hold.scrollLeft + hold.clientWidth) hold.scrollLeft = x + reach - hold.clientWidth;
}
