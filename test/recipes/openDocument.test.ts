import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { threadFaults } from '../../core/presets/thread.ts';
import { presetBundleFormat, presetFormat, recipeFormat } from '../../core/recipes/documentFormats.ts';
import { type DocumentFormat, documentText, openDocument } from '../../core/recipes/openDocument.ts';
import type { Recipe } from '../../core/recipes/recipe.ts';
import { changeParameters, dropChanges, keepState, returnToState } from '../../core/recipes/recipeHistory.ts';
import { moment, sampleRecipe } from './sampleRecipes.ts';

const fixture = (name: string) =>
  readFileSync(new URL(`../fixtures/recipes/${name}`, import.meta.url), 'utf8');

function openRecipe(text: string): Recipe {
  const opened = openDocument(text, recipeFormat);
  if (opened.kind !== 'usable') throw new Error(opened.message);
  return opened.document;
}

describe('every stored file we ever wrote', () => {
  it('opens: recipe of schema 1', () => {
    const recipe = openRecipe(fixture('recipe-schema-1.json'));
    for (const history of recipe.histories) expect(threadFaults(history.states)).toEqual([]);
    expect(recipe.histories.map((history) => history.states.length)).toEqual([3, 1]);
  });

  it.each([
    ['preset-schema-1.json', presetFormat as DocumentFormat<unknown>],
    ['presets-schema-1.json', presetBundleFormat as DocumentFormat<unknown>],
  ])('opens: %s', (name, format) => {
    expect(openDocument(fixture(name), format)).toMatchObject({ kind: 'usable', migratedFrom: null });
  });
});

describe('fields nobody here knows', () => {
  const text = fixture('recipe-schema-1-unknown-fields.json');

  it('survive opening and writing to the byte', () => {
    expect(documentText(openRecipe(text))).toBe(text);
  });

  it('survive work on the recipe', () => {
    const recipe = openRecipe(text);
    const before = JSON.parse(text);
    const kept = keepState(changeParameters(recipe, { 'body.brush': '7mm' }), '', moment(9));
    const after = JSON.parse(documentText(returnToState(kept, recipe.work.stateId, moment(10))));
    expect(after.later).toEqual(before.later);
    expect(after.photo).toEqual(before.photo);
    expect(after.work.mood).toEqual(before.work.mood);
    expect(after.work.output).toEqual(before.work.output);
    expect(after.histories[0]).toEqual(before.histories[0]);
    expect(after.histories[1].states[1].parameters['body.later']).toBe(0.5);
    expect(dropChanges(recipe).work.mood).toEqual(before.work.mood);
  });

  it('survive whatever they are', () => {
    const value = fc.jsonValue({ maxDepth: 3 }).map((field) => JSON.parse(JSON.stringify(field)));
    fc.assert(
      fc.property(fc.dictionary(fc.string(), value, { maxKeys: 4 }), (extra) => {
        const added = JSON.stringify({ ...extra, ...sampleRecipe() });
        const opened = openRecipe(added);
        expect(JSON.stringify(opened)).toBe(added);
        expect(changeParameters(opened, { 'body.brush': '7mm' })).toMatchObject(
          JSON.parse(JSON.stringify(extra)),
        );
      }),
      { numRuns: 200 },
    );
  });

  it('survive even under the name __proto__', () => {
    const text = documentText(sampleRecipe()).replace('{', '{ "__proto__": { "heron": 1 },');
    const changed = changeParameters(openRecipe(text), { 'body.brush': '7mm' });
    expect(documentText(changed)).toContain('"__proto__": {');
  });
});

describe('a recipe of a newer schema', () => {
  it.each([
    ['recipe-schema-99.json', true],
    ['recipe-schema-99-not-understood.json', false],
  ])('is open for looking only: %s', (name, isUnderstood) => {
    const opened = openDocument(fixture(name), recipeFormat);
    expect(opened).toMatchObject({
      kind: 'newer',
      schema: 99,
      message: expect.stringMatching(/newer Oxgall.*Update/),
    });
    expect(opened.kind === 'newer' && opened.document !== null).toBe(isUnderstood);
  });
});

describe('an older schema', () => {
  const format: DocumentFormat<{ brushMm: number; unit: string }> = {
    format: 'plate',
    word: 'plate',
    latest: 3,
    schema: z.looseObject({ schema: z.literal(3), brushMm: z.number(), unit: z.string() }),
    migrations: [
      ({ brush, ...rest }) => ({ ...rest, brushMm: Number(brush) * 10 }),
      (document) => ({ ...document, unit: 'mm' }),
    ],
  };

  it('goes through every migration in turn and keeps the fields nobody knows', () => {
    const opened = openDocument('{"format":"plate","schema":1,"brush":"0.5","mood":"calm"}', format);
    expect(opened).toEqual({
      kind: 'usable',
      migratedFrom: 1,
      document: { format: 'plate', schema: 3, brushMm: 5, unit: 'mm', mood: 'calm' },
    });
    expect(openDocument('{"format":"plate","schema":2,"brushMm":5}', format)).toMatchObject({
      migratedFrom: 2,
    });
  });

  it('has a migration for each step in every format we store', () => {
    for (const { latest, migrations } of [recipeFormat, presetFormat, presetBundleFormat])
      expect(migrations).toHaveLength(latest - 1);
  });
});

describe('a damaged recipe', () => {
  const text = documentText(sampleRecipe());

  it('says so wherever it was cut off', () => {
    const bytes = Buffer.from(text);
    // The last byte is the line end: without it the recipe is still whole.
    for (let length = 0; length < bytes.length - 1; length++) {
      const opened = openDocument(bytes.subarray(0, length).toString('utf8'), recipeFormat);
      expect(opened.kind, `cut at ${length}`).toBe('damaged');
      expect(opened.kind === 'damaged' && opened.message.startsWith('This ')).toBe(true);
    }
  });

  const without = (change: (recipe: Recipe) => unknown) => {
    const recipe = JSON.parse(text);
    change(recipe);
    return JSON.stringify(recipe);
  };

  it.each<[string, string, RegExp]>([
    ['an empty file', ' \n', /recipe is empty/],
    ['a list', '[]', /Expected an object/],
    ['another format', '{"format":"other"}', /Expected "oxgall-recipe" for format, received "other"/],
    [
      'no schema',
      '{"format":"oxgall-recipe"}',
      /Expected a whole number from 1 for schema, received nothing/,
    ],
    [
      'a value outside its range',
      without((r) => {
        r.work.changes['body.coats'] = 9;
      }),
      /from 0 to 6 for work › changes › body\.coats, received 9/,
    ],
    [
      'a length outside its range',
      without((r) => {
        r.work.changes['body.brush'] = '900mm';
      }),
      /for work › changes › body\.brush, received "900mm"/,
    ],
    [
      'a state that is not there',
      without((r) => {
        r.work.stateId = 'ab'.repeat(32);
      }),
      /a state of Low Water for work › stateId/,
    ],
    [
      'a preset without a history',
      without((r) => {
        r.work.preset = 'dusk';
      }),
      /for work › preset, received "dusk"/,
    ],
    [
      'a use of no known state',
      without((r) => {
        r.histories[0].uses[0].stateId = 'ab'.repeat(32);
      }),
      /uses › 0 › stateId/,
    ],
    [
      'strokes that are not there',
      without((r) => {
        r.histories[0].uses[0].tightnessId = 'ab'.repeat(32);
      }),
      /a key of tightnessMaps/,
    ],
    [
      'a number too large',
      text.replace('"sizeBytes": 1234', '"sizeBytes": 1234, "far": [1e999]'),
      /too large to keep: photo › far › 0/,
    ],
  ])('says what is wrong with %s', (_, damaged, message) => {
    const opened = openDocument(damaged, recipeFormat);
    expect(opened.kind === 'damaged' ? opened.message : opened.kind).toMatch(message);
  });

  it('opens in spite of a byte order mark and other line ends', () => {
    expect(openRecipe(`\uFEFF${text.replaceAll('\n', '\r\n')}`)).toEqual(sampleRecipe());
  });
});
