import { describe, expect, it } from 'vitest';
import {
  changeParameters,
  currentHistory,
  currentParameters,
  keepState,
  returnToState,
} from '../../core/recipes/recipeHistory.ts';
import {
  beginSession,
  placeMark,
  redo,
  step,
  undo,
  undoToMark,
  type WorkSession,
} from '../../core/recipes/workSession.ts';
import { moment, sampleRecipe } from './sampleRecipes.ts';

const brush = (session: WorkSession, value: string, nowMs: number, group?: string) =>
  step(session, { label: 'Brush', group, nowMs }, (recipe) =>
    changeParameters(recipe, { 'body.brush': value }),
  );
const brushOf = (session: WorkSession) => currentParameters(session.recipe)['body.brush'];

describe('undo and redo', () => {
  const start = beginSession(sampleRecipe());

  it('move the easel back and forth', () => {
    const two = brush(brush(start, '5mm', 0), '6mm', 10);
    expect(brushOf(undo(two))).toBe('5mm');
    expect(undo(undo(two)).recipe.work).toEqual(start.recipe.work);
    expect(redo(undo(two))).toEqual(two);
    expect(undo(start)).toBe(start);
    expect(redo(two)).toBe(two);
  });

  it('take quick steps of one group as one, measured from step to step', () => {
    const drag = [100, 800, 1500].reduce(
      (session, atMs, at) => brush(session, `${at + 5}mm`, atMs, 'drag'),
      start,
    );
    expect(drag.past).toHaveLength(1);
    expect(undo(drag).recipe.work).toEqual(start.recipe.work);
    expect(brush(drag, '9mm', 2400, 'drag').past).toHaveLength(2);
    expect(brush(drag, '9mm', 1600, 'other').past).toHaveLength(2);
    expect(brush(drag, '9mm', 1600).past).toHaveLength(2);
  });

  it('do not let a step melt into one that was undone', () => {
    const back = undo(brush(brush(start, '5mm', 0, 'drag'), '6mm', 2000, 'drag'));
    const other = brush(back, '7mm', 100, 'drag');
    expect(other.past).toHaveLength(2);
    expect(other.future).toEqual([]);
  });

  it('go back to a mark, which no group melts across', () => {
    const marked = placeMark(brush(start, '5mm', 0, 'drag'), 'dialogue');
    const later = brush(brush(marked, '6mm', 10, 'drag'), '7mm', 2000);
    expect(brushOf(undoToMark(later, 'dialogue'))).toBe('5mm');
    expect(() => undoToMark(later, 'unknown')).toThrow(RangeError);
    const left = brush(undo(undo(undo(later))), '8mm', 3000);
    expect(() => undoToMark(left, 'dialogue')).toThrow(RangeError);
  });

  it('undo a return without taking its state away', () => {
    const first = start.recipe.work.stateId;
    const kept = step(brush(start, '5mm', 0), { label: 'Keep', nowMs: 1 }, (recipe) =>
      keepState(recipe, '', moment(1)),
    );
    const returned = step(kept, { label: 'Return', nowMs: 2 }, (recipe) =>
      returnToState(recipe, first, moment(2)),
    );
    const undone = undo(returned);
    expect(undone.recipe.work).toEqual(kept.recipe.work);
    expect(currentHistory(undone.recipe).states).toHaveLength(3);
    expect(redo(undone)).toEqual(returned);
  });

  it('make no step of nothing', () => {
    expect(step(start, { label: 'Nothing', nowMs: 0 }, (recipe) => recipe)).toBe(start);
  });

  it('forget the oldest of more than a thousand steps', () => {
    let session = start;
    for (let at = 0; at < 1010; at++) session = brush(session, at % 2 ? '5mm' : '6mm', at);
    expect(session.past).toHaveLength(1000);
  });
});
