import { describe, expect, it } from 'vitest';
import { defaultParameters } from '../../core/parameters/table.ts';
import { makeState, type State } from '../../core/presets/state.ts';
import { appendState } from '../../core/presets/thread.ts';
import { placeStates, ringWidthPx, threadWidthPx, xOf } from '../../renderer/states/threadLayout.ts';

const contentOf = (parent: string | null, note: string) => ({
  parameters: defaultParameters(),
  engineVersion: '1',
  note,
  time: '',
  parent,
});

/** A thread in which every tenth state leads on from the one ten before it. */
function makeThread(count: number): State[] {
  let states = [makeState(contentOf(null, ''), 1)];
  while (states.length < count) {
    const parent = states.at(states.length % 10 === 0 ? -10 : -1)!;
    states = appendState(states, contentOf(parent.id, String(states.length))).states;
  }
  return states;
}

describe('the layout of the thread', () => {
  it('lets no two rings touch, however long their numerals', () => {
    for (let index = 1; index < 1000; index++) {
      const betweenPx = xOf(index) - xOf(index - 1) - (ringWidthPx(index) + ringWidthPx(index + 1)) / 2;
      expect(betweenPx, `${index} and ${index + 1}`).toBeGreaterThanOrEqual(12);
    }
  });

  it('leaves room for a ring at either end', () => {
    expect(xOf(0)).toBeGreaterThan(ringWidthPx(1) / 2);
    for (const count of [1, 2, 38, 500])
      expect(threadWidthPx(count) - xOf(count)).toBeGreaterThan(ringWidthPx(1) / 2);
  });

  it('places every state that is in view, and few besides', () => {
    const states = makeThread(240);
    for (let leftPx = 0; leftPx < threadWidthPx(240); leftPx += 97) {
      const widthPx = 640;
      const placed = placeStates(states, leftPx, widthPx);
      const ids = new Set(placed.map(({ state }) => state.id));
      for (const [index, state] of states.entries()) {
        const half = ringWidthPx(state.number) / 2;
        const isInView = xOf(index) + half > leftPx && xOf(index) - half < leftPx + widthPx;
        if (isInView) expect(ids.has(state.id), `state ${state.number} at ${leftPx}`).toBe(true);
      }
      expect(placed.length).toBeLessThan(30);
    }
  });

  it('leads an arc to a state that does not stand beside the one it follows', () => {
    const placed = placeStates(makeThread(30), 0, 2000);
    const arcs = placed.filter(({ fromXPx }) => fromXPx !== null);
    expect(arcs.map(({ state }) => state.number)).toEqual([11, 21]);
    expect(arcs.map(({ fromXPx }) => fromXPx)).toEqual([xOf(0), xOf(10)]);
  });
});
