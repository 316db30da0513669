import { readdirSync, readFileSync } from 'node:fs';
import { Ajv2020 } from 'ajv/dist/2020.js';
import { describe, expect, it } from 'vitest';
import { jsonSchemas } from '../../core/recipes/jsonSchemas.ts';
import { type SeriesDocument, startSeries, withOverride } from '../../core/series/seriesDocument.ts';
import { sampleRecipe } from './sampleRecipes.ts';

const at = (path: string) => new URL(`../../${path}`, import.meta.url);
const readJson = (path: string) => JSON.parse(readFileSync(at(path), 'utf8'));

/** A general-purpose validator. Formats are left to the patterns that stand beside them. */
const validators = new Map(
  readdirSync(at('presets/schemas/')).map((name) => {
    const ajv = new Ajv2020({ allErrors: true, validateFormats: false, allowUnionTypes: true });
    return [name, ajv.compile(readJson(`presets/schemas/${name}`))] as const;
  }),
);

describe('the shipped JSON Schemas', () => {
  it('are those of the definition; node build/writeSchemas.mjs writes them anew', () => {
    for (const [name, schema] of Object.entries(jsonSchemas()))
      expect(readJson(`presets/schemas/${name}`), name).toEqual(JSON.parse(JSON.stringify(schema)));
    expect([...validators.keys()].sort()).toEqual(Object.keys(jsonSchemas()).sort());
  });

  it('declare draft 2020-12', () => {
    for (const schema of Object.values(jsonSchemas()))
      expect(schema.$schema).toBe('https://json-schema.org/draft/2020-12/schema');
  });

  it.each([
    ['recipe.schema.json', 'test/fixtures/recipes/recipe-schema-1.json'],
    ['recipe.schema.json', 'test/fixtures/recipes/recipe-schema-1-unknown-fields.json'],
    ['preset.schema.json', 'test/fixtures/recipes/preset-schema-1.json'],
    ['presets.schema.json', 'test/fixtures/recipes/presets-schema-1.json'],
    ...readdirSync(at('presets/'))
      .filter((name) => name.endsWith('.json'))
      .map((name) => ['built-in-preset.schema.json', `presets/${name}`]),
  ])('%s takes %s', (schema, path) => {
    const validate = validators.get(schema)!;
    expect(validate(readJson(path)), JSON.stringify(validate.errors)).toBe(true);
  });

  type Spoil = (recipe: ReturnType<typeof sampleRecipe>) => void;
  it.each<[string, Spoil]>([
    [
      'a number outside its range',
      (r) => {
        r.work.changes['body.coats'] = 9;
      },
    ],
    [
      'a fraction where a whole number belongs',
      (r) => {
        r.work.changes['body.coats'] = 1.5;
      },
    ],
    [
      'a length without its unit',
      (r) => {
        Object.assign(r.work.changes, { 'body.brush': '5' });
      },
    ],
    [
      'an unknown choice',
      (r) => {
        Object.assign(r.work.changes, { 'body.method': 'magic' });
      },
    ],
    [
      'a missing photo',
      (r) => {
        Object.assign(r, { photo: undefined });
      },
    ],
    [
      'a hash in capitals',
      (r) => {
        r.photo.sha256 = r.photo.sha256.toUpperCase();
      },
    ],
    [
      'a stroke outside the picture',
      (r) => {
        r.work.tightness = [{ points: [[2, 0]], radiusPermille: 1, value: 0, hardness: 0 }];
      },
    ],
    [
      'twelve bits',
      (r) => {
        Object.assign(r.work.output, { depth: 12 });
      },
    ],
    [
      'another schema',
      (r) => {
        Object.assign(r, { schema: 2 });
      },
    ],
    [
      'a time that is none',
      (r) => {
        r.histories[0].uses[0].time = 'yesterday';
      },
    ],
  ])('recipe.schema.json refuses %s', (_, spoil) => {
    const validate = validators.get('recipe.schema.json')!;
    const recipe: ReturnType<typeof sampleRecipe> = JSON.parse(JSON.stringify(sampleRecipe()));
    expect(validate(recipe)).toBe(true);
    spoil(recipe);
    expect(validate(JSON.parse(JSON.stringify(recipe)))).toBe(false);
  });

  const sampleSeries = (): SeriesDocument => {
    const { name, states } = readJson('test/fixtures/recipes/preset-schema-1.json');
    const series = startSeries(['plate 1.jpg', 'plate 2.jpg'], { name, state: states[0] });
    const overrides = withOverride([], ['plate 2.jpg'], { look: series.look, parts: series.match.parts });
    return { ...series, leftOut: ['plate 1.jpg'], overrides };
  };

  it.each<[string, (series: SeriesDocument) => void]>([
    ['a match of more than all', ({ match }) => Object.assign(match, { amount01: 1.01 })],
    ['a lead that is no name', (series) => Object.assign(series, { lead: 7 })],
    ['an override of no frame', ({ overrides }) => Object.assign(overrides[0], { frames: [] })],
    ['a part that is not said', ({ match }) => Reflect.deleteProperty(match.parts, 'ink')],
    ['a look without its parameters', ({ look }) => Reflect.deleteProperty(look, 'parameters')],
    ['another format', (series) => Object.assign(series, { format: 'oxgall-recipe' })],
    ['another schema', (series) => Object.assign(series, { schema: 2 })],
  ])('series.schema.json refuses %s', (_, spoil) => {
    const validate = validators.get('series.schema.json')!;
    const series: SeriesDocument = JSON.parse(JSON.stringify(sampleSeries()));
    expect(validate(series), JSON.stringify(validate.errors)).toBe(true);
    expect(validate({ ...series, lead: null })).toBe(true);
    spoil(series);
    expect(validate(series)).toBe(false);
  });
});
