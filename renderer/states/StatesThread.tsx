import { type KeyboardEvent, useEffect, useMemo, useRef, useState } from 'react';
import { toRoman } from '../../core/presets/roman.ts';
import type { State } from '../../core/presets/state.ts';
import { partings } from '../../core/presets/thread.ts';
import type { PresetHistory } from '../../core/recipes/recipe.ts';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { returnTo } from '../app/memoryWork.ts';
import type { Look } from '../state/lookStore.ts';
import { comparisonStore } from '../state/memoryStore.ts';
import { useStore } from '../state/store.ts';
import { stateDragType } from './comparing.ts';
import { StateCard } from './StateCard.tsx';
import { sentenceOfUnkept } from './stateWords.ts';
import { ThreadLine } from './ThreadLine.tsx';
import { keepingStore, threadCallStore } from './threadCalls.ts';
import { placeStates, ringWidthPx, threadWidthPx, toRem, xOf } from './threadLayout.ts';
import { bringIntoView, useThreadView } from './threadScroll.ts';

interface ThreadProps {
  history: PresetHistory;
  look: Look;
  photo: OpenedPhoto;
  /** The easel holds changes that no state holds. */
  hasUnkeptWork: boolean;
  isReadOnly: boolean;
}

/** The states of the preset on the easel, in the order they were kept, as numerals on a line. */
export function StatesThread({ history, look, photo, hasUnkeptWork, isReadOnly }: ThreadProps) {
  const { states } = history;
  const row = useRef<HTMLElement>(null);
  const hold = useRef<HTMLDivElement>(null);
  const view = useThreadView(hold);
  const comparison = useStore(comparisonStore);
  const presentIndex = states.findIndex(({ id }) => id === look.stateId);
  const { pointedId, setPointedId, walkTo } = usePointed(states, presentIndex, hold);
  const delivered = useMemo(
    () => new Set(history.deliveries.map(({ stateId }) => stateId)),
    [history.deliveries],
  );
  const branches = useMemo(() => branchNames(history), [history]);
  const placed = placeStates(states, view.leftPx, view.widthPx);
  const pointedIndex = states.findIndex(({ id }) => id === pointedId);
  const pointed = states[pointedIndex];
  // Somebody who writes in the card keeps it, wherever the pointer goes.
  const isWriting = () => row.current?.querySelector('.state-card input:focus') !== null;
  const point = (id: string | null) => {
    if (!isWriting()) setPointedId(id);
  };
  const onKeyDown = (event: KeyboardEvent) => {
    const from = pointedIndex >= 0 ? pointedIndex : presentIndex;
    const places = { ArrowLeft: from - 1, ArrowRight: from + 1, Home: 0, End: states.length - 1 };
    if (!(event.key in places)) return;
    walkTo(places[event.key as keyof typeof places]);
    event.preventDefault();
    event.stopPropagation();
  };
  const focusPointed = () =>
    hold.current?.querySelector<HTMLElement>(`[data-state="${pointed?.id}"]`)?.focus();
  const onEscape = (event: KeyboardEvent) => {
    if (event.key !== 'Escape' || !pointed) return;
    focusPointed();
    setPointedId(null);
    event.preventDefault();
    event.stopPropagation();
  };
  return (
    <section
      ref={row}
      className="thread"
      aria-label="States thread"
      onMouseLeave={() => point(null)}
      onBlur={(event) => {
        if (!event.currentTarget.contains(event.relatedTarget)) setPointedId(null);
      }}
      onKeyDown={onEscape}
    >
      <div
        ref={hold}
        className="thread-hold"
        role="toolbar"
        aria-label={`States of ${history.title}`}
        onKeyDown={onKeyDown}
      >
        <div className="thread-run" style={{ width: toRem(threadWidthPx(states.length)) }}>
          <ThreadLine
            placed={placed}
            count={states.length}
            unkeptFrom={hasUnkeptWork ? Math.max(0, presentIndex) : null}
          />
          {placed.map(({ state, xPx }) => {
            const isPresent = state.id === look.stateId;
            const isCompared =
              comparison !== null &&
              [comparison.left, comparison.right].some(
                (side) => side.kind === 'state' && side.stateId === state.id,
              );
            return (
              <button
                key={state.id}
                type="button"
                className={[
                  'thread-state',
                  isPresent && 'is-present',
                  delivered.has(state.id) && 'is-delivered',
                  isCompared && 'is-compared',
                ]
                  .filter(Boolean)
                  .join(' ')}
                style={{ left: toRem(xPx), width: toRem(ringWidthPx(state.number)) }}
                data-state={state.id}
                tabIndex={state.id === (pointedId ?? look.stateId) ? 0 : -1}
                aria-current={isPresent ? 'true' : undefined}
                aria-label={nameOf(state, history, isPresent, delivered.has(state.id))}
                draggable
                onDragStart={(event) => {
                  event.dataTransfer.setData(stateDragType, state.id);
                  event.dataTransfer.effectAllowed = 'copy';
                  setPointedId(null);
                }}
                onMouseEnter={() => point(state.id)}
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
          {hasUnkeptWork && (
            <UnkeptWork look={look} xPx={xOf(states.length)} isReadOnly={isReadOnly} onPointed={point} />
          )}
        </div>
      </div>
      {pointed && (
        <StateCard
          key={pointed.id}
          state={pointed}
          history={history}
          look={look}
          photo={photo}
          branch={branches.get(pointed.id) ?? null}
          isReadOnly={isReadOnly}
          xPx={xOf(pointedIndex) - view.leftPx}
          threadWidthPx={view.widthPx}
          onFinished={focusPointed}
        />
      )}
    </section>
  );
}

/** Which state is pointed at or focused, and how the keyboard walks from one to another. */
function usePointed(
  states: readonly State[],
  presentIndex: number,
  hold: React.RefObject<HTMLElement | null>,
) {
  const [pointedId, setPointedId] = useState<string | null>(null);
  /** The state that the keyboard goes to. */
  const wanted = useRef<string | null>(null);
  const walkTo = (index: number) => {
    const next = Math.min(states.length - 1, Math.max(0, index));
    bringIntoView(hold.current, next);
    setPointedId(states[next].id);
    wanted.current = states[next].id;
  };
  useEffect(() => bringIntoView(hold.current, presentIndex), [hold, presentIndex]);
  const called = useStore(threadCallStore);
  const walkToPresent = useRef(() => {});
  walkToPresent.current = () => walkTo(presentIndex);
  const answered = useRef(called);
  useEffect(() => {
    if (called !== answered.current) walkToPresent.current();
    answered.current = called;
  }, [called]);
  // A state that was out of view is there only after the next drawing.
  useEffect(() => {
    if (wanted.current === null) return;
    const button = hold.current?.querySelector<HTMLElement>(`[data-state="${wanted.current}"]`);
    if (!button) return;
    wanted.current = null;
    button.focus();
  });
  return { pointedId, setPointedId, walkTo };
}

interface UnkeptProps {
  look: Look;
  xPx: number;
  isReadOnly: boolean;
  onPointed: (id: null) => void;
}

/** What lies on the easel and no state holds: a dashed ring at the thread's end. */
function UnkeptWork({ look, xPx, isReadOnly, onPointed }: UnkeptProps) {
  const sentence = sentenceOfUnkept(look);
  return (
    <button
      type="button"
      className="thread-state thread-unkept"
      style={{ left: toRem(xPx) }}
      aria-label={`Not kept yet: ${sentence}`}
      title={`Not kept yet: ${sentence}`}
      disabled={isReadOnly}
      onMouseEnter={() => onPointed(null)}
      onClick={() => keepingStore.set(true)}
    />
  );
}

function nameOf(state: State, { margins }: PresetHistory, isPresent: boolean, isDelivered: boolean): string {
  const note = margins[state.id]?.note ?? state.note;
  const facts = [isPresent && 'on the easel', isDelivered && 'delivered', note].filter(Boolean);
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
