import { describe, expect, it } from 'vitest';
import { engineVersion } from '../../core/engineVersion.ts';
import { threadFaults } from '../../core/presets/thread.ts';
import { holdsEveryState, mergeRecipes } from '../../core/recipes/mergeRecipes.ts';
import { recipeSchema } from '../../core/recipes/recipe.ts';
import {
  changeOutput,
  changeParameters,
  currentHistory,
  currentParameters,
  currentState,
  dropChanges,
  hasUnkeptChanges,
  keepState,
  layPreset,
  noteDelivery,
  repaintWithEngine,
  returnToState,
  setTightness,
  strokesOf,
  takeLook,
  writeBeside,
} from '../../core/recipes/recipeHistory.ts';
import type { TightnessStroke } from '../../core/recipes/tightnessStroke.ts';
import { heronPhoto, moment, samplePreset, sampleRecipe } from './sampleRecipes.ts';

const eye: TightnessStroke = { points: [[0.5, 0.25]], radiusPermille: 20, value: 1, hardness: 0.5 };
const bank: TightnessStroke = { points: [[0.1, 0.9]], radiusPermille: 90, value: -1, hardness: 0 };
const file = { path: 'painted/heron.tif', sha256: 'cd'.repeat(32), pixelsSha256: 'ef'.repeat(32) };

describe('changes over a state', () => {
  it('are laid over it, and vanish when they come back to its value', () => {
    const changed = changeParameters(sampleRecipe(), { 'body.brush': '5mm', 'body.coats': 2 });
    expect(changed.work.changes).toEqual({ 'body.brush': '5mm' });
    expect(currentParameters(changed)['body.brush']).toBe('5mm');
    expect(hasUnkeptChanges(changeParameters(changed, { 'body.brush': '3.2mm' }))).toBe(false);
    expect(dropChanges(changed).work.changes).toEqual({});
  });

  it('are checked against the table', () => {
    expect(() => changeParameters(sampleRecipe(), { 'body.coats': 9 })).toThrow(
      /from 0 to 6 for body\.coats, received 9/,
    );
  });
});

describe('keeping and returning', () => {
  it('appends, and leaves what was there as it was', () => {
    const first = sampleRecipe();
    const text = JSON.stringify(first);
    const second = keepState(changeParameters(first, { 'body.brush': '5mm' }), 'broader', moment(1));
    expect(JSON.stringify(first)).toBe(text);
    expect(currentState(second)).toMatchObject({ number: 2, note: 'broader', parent: first.work.stateId });
    expect(hasUnkeptChanges(second)).toBe(false);
    const back = returnToState(second, first.work.stateId, moment(2));
    expect(currentState(back)).toMatchObject({ number: 3, parent: first.work.stateId });
    expect(currentParameters(back)).toEqual(currentParameters(first));
    expect(currentHistory(back).states.slice(0, 2)).toEqual(currentHistory(second).states);
    expect(threadFaults(currentHistory(back).states)).toEqual([]);
    expect(recipeSchema.safeParse(back).success).toBe(true);
  });

  it('brings back the strokes that the state had', () => {
    const tight = keepState(setTightness(sampleRecipe(), [eye]), 'eye tight', moment(1));
    const loose = keepState(setTightness(tight, [eye, bank]), 'bank loose', moment(2));
    expect(returnToState(loose, tight.work.stateId, moment(3)).work.tightness).toEqual([eye]);
  });

  it.each([
    ['changes', changeParameters(sampleRecipe(), { 'body.brush': '5mm' })],
    ['strokes', setTightness(sampleRecipe(), [bank])],
  ])('sets unkept %s aside as a state of its own', (_, recipe) => {
    const back = returnToState(recipe, recipe.work.stateId, moment(1));
    const [, aside] = currentHistory(back).states;
    expect(aside.note).toBe('Set aside');
    const again = returnToState(back, aside.id, moment(2));
    expect(currentParameters(again)).toEqual(currentParameters(recipe));
    expect(again.work.tightness).toEqual(recipe.work.tightness);
  });

  it('refuses a state that is not there', () => {
    expect(() => returnToState(sampleRecipe(), 'ab'.repeat(32), moment(1))).toThrow(RangeError);
  });
});

describe('output settings', () => {
  const frame = { aspect: 0.8, x01: 0.25, y01: 0.5 };

  it('change by what is named; the rest stays, fields of newer versions too', () => {
    const own = changeOutput(sampleRecipe(), { bleedMm: 3, paperStock: 'laid' });
    const changed = changeOutput(own, { ppi: 240, quality: undefined });
    expect(changed.work.output).toEqual({ ...own.work.output, ppi: 240 });
    expect(changed.work.output).toMatchObject({ bleedMm: 3, paperStock: 'laid', quality: 92 });
  });

  it('keep the crop frame unless it is named, and lose it by null', () => {
    const framed = changeOutput(sampleRecipe(), { cropFrame: frame });
    expect(changeOutput(framed, { bleedMm: 3 }).work.output.cropFrame).toEqual(frame);
    const bare = changeOutput(framed, { cropFrame: null });
    expect(bare.work.output).toEqual(sampleRecipe().work.output);
    expect(recipeSchema.safeParse(bare).success).toBe(true);
  });
});

describe('laying another look', () => {
  it('keeps a history for each preset', () => {
    const kept = keepState(sampleRecipe(), 'mine', moment(1));
    const dusk = samplePreset('Dusk', '8mm');
    const laid = layPreset(kept, dusk, dusk.states[0].id, moment(2));
    expect(laid.histories.map((history) => [history.title, history.states.length])).toEqual([
      ['Low Water', 2],
      ['Dusk', 1],
    ]);
    const back = returnToState(laid, kept.work.stateId, moment(3), 'low-water');
    expect(currentHistory(back).title).toBe('Low Water');
    expect(currentHistory(back).states).toHaveLength(3);
  });

  it("takes another recipe's look with its changes, and keeps its own strokes and output", () => {
    const dusk = changeParameters(sampleRecipe(samplePreset('Dusk', '8mm')), { 'body.hold': 0.4 });
    const own = changeOutput(setTightness(sampleRecipe(), [eye]), { printLongEdgeMm: 420 });
    const taken = takeLook(own, dusk, moment(1));
    expect(currentParameters(taken)).toEqual(currentParameters(dusk));
    expect(taken.work.tightness).toEqual([eye]);
    expect(taken.work.output.printLongEdgeMm).toBe(420);
  });
});

describe('deliveries', () => {
  it('name a state, the strokes, the output and the photo, so that the file can be painted again', () => {
    const recipe = setTightness(changeParameters(sampleRecipe(), { 'body.brush': '5mm' }), [eye]);
    const delivered = noteDelivery(recipe, file, moment(1));
    const [delivery] = currentHistory(delivered).deliveries;
    expect(delivery).toMatchObject({ ...file, photoSha256: heronPhoto.sha256, engineVersion: '1' });
    expect(currentState(delivered)).toMatchObject({ id: delivery.stateId, note: 'Delivered' });
    expect(strokesOf(delivered, delivery.tightnessId)).toEqual([eye]);
    expect(recipeSchema.safeParse(delivered).success).toBe(true);
    const loosened = setTightness(delivered, [bank]);
    expect(returnToState(loosened, delivery.stateId, moment(2)).work.tightness).toEqual([eye]);
  });

  it('keep no state where nothing is unkept', () => {
    const delivered = noteDelivery(sampleRecipe(), file, moment(1));
    expect(currentHistory(delivered).states).toHaveLength(1);
  });
});

describe("today's engine", () => {
  it('repaints as a new state with the same parameters and keeps the changes over it', () => {
    const old = changeParameters(sampleRecipe(), { 'body.brush': '5mm' });
    const today = repaintWithEngine(old, moment(1, `${engineVersion}-next`));
    expect(currentState(today)).toMatchObject({ number: 2, engineVersion: `${engineVersion}-next` });
    expect(currentParameters(today)).toEqual(currentParameters(old));
    expect(repaintWithEngine(today, moment(2, `${engineVersion}-next`))).toBe(today);
  });
});

describe('margins', () => {
  it('change without touching the state', () => {
    const recipe = sampleRecipe();
    const { stateId } = recipe.work;
    const noted = writeBeside(recipe, 'low-water', stateId, { note: 'client liked it' });
    expect(currentHistory(noted).margins[stateId]).toEqual({ note: 'client liked it' });
    expect(currentState(noted)).toBe(currentState(recipe));
    const wiped = writeBeside(noted, 'low-water', stateId, { note: '' });
    expect(currentHistory(wiped).margins).toEqual({});
  });
});

describe('two versions of one recipe', () => {
  const first = sampleRecipe();
  const ours = noteDelivery(keepState(first, 'ours', moment(1)), file, moment(2));
  const theirs = changeParameters(keepState(first, 'theirs', moment(3)), { 'body.brush': '9mm' });
  const merged = mergeRecipes(ours, theirs, moment(4));

  it('become one that holds every state and delivery of both, with our easel', () => {
    expect(holdsEveryState(merged, ours) && holdsEveryState(merged, theirs)).toBe(true);
    expect(merged.work).toEqual(ours.work);
    expect(currentHistory(merged).deliveries).toEqual(currentHistory(ours).deliveries);
    expect(threadFaults(currentHistory(merged).states)).toEqual([]);
    expect(recipeSchema.safeParse(merged).success).toBe(true);
  });

  it('keep what lay on the other easel as a state', () => {
    const last = currentHistory(merged).states.at(-1)!;
    expect(last).toMatchObject({ note: 'Kept from the other version', parent: theirs.work.stateId });
    expect(last.parameters['body.brush']).toBe('9mm');
  });

  it('do not keep the other easel twice when they meet twice', () => {
    expect(mergeRecipes(merged, theirs, moment(6)).histories).toEqual(merged.histories);
  });

  it('are unchanged by themselves', () => {
    expect(mergeRecipes(ours, ours, moment(5))).toEqual(ours);
  });
});
