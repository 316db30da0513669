import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { closeGroup, recordChange, redo, startHistory, undo } from '../../renderer/state/undoHistory.ts';

const held = (name: string) => ({ name, held: true });
const loose = (name: string) => ({ name, held: false });

describe('undo history', () => {
  it('makes one step of a drag, however long the hand rests', () => {
    let history = startHistory(0);
    for (const [index, value] of [1, 2, 3].entries())
      history = recordChange(history, value, 'strength', held('drag 1'), index * 10_000);
    expect(history.past).toHaveLength(1);
    expect(undo(history).present).toBe(0);
  });

  it('joins quick key presses of one control, and no slow ones', () => {
    let history = startHistory(0);
    history = recordChange(history, 1, 'pull', loose('pull'), 0);
    history = recordChange(history, 2, 'pull', loose('pull'), 300);
    history = recordChange(history, 3, 'pull', loose('pull'), 2000);
    expect(history.past.map((step) => step.value)).toEqual([0, 2]);
  });

  it('starts a new step after a drag has ended, and for another control', () => {
    let history = recordChange(startHistory(0), 1, 'a', held('a'), 0);
    history = recordChange(closeGroup(history), 2, 'a', held('a'), 1);
    history = recordChange(history, 3, 'b', loose('b'), 2);
    expect(history.past).toHaveLength(3);
  });

  it('holds to a plain list of values through any run of changes, undos and redos', () => {
    const step = fc.oneof(fc.record({ set: fc.integer() }), fc.constant('undo'), fc.constant('redo'));
    fc.assert(
      fc.property(fc.array(step, { maxLength: 60 }), (steps) => {
        let history = startHistory(0);
        let model = [0];
        let at = 0;
        for (const [index, next] of steps.entries()) {
          if (next === 'undo') {
            history = undo(history);
            at = Math.max(0, at - 1);
          } else if (next === 'redo') {
            history = redo(history);
            at = Math.min(model.length - 1, at + 1);
          } else {
            const { set } = next as { set: number };
            history = recordChange(history, set, 'set', null, index);
            model = [...model.slice(0, at + 1), set];
            at += 1;
          }
          expect(history.present).toBe(model[at]);
        }
      }),
      { numRuns: 300 },
    );
  });
});
