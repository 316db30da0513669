import { readdir, readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { defaultParameters } from '../../core/parameters/table.ts';
import {
  describePreset,
  keepInPreset,
  latestState,
  type Preset,
  renamePreset,
  returnInPreset,
} from '../../core/presets/preset.ts';
import { PresetStore } from '../../main/store/presetStore.ts';
import { moment } from '../recipes/sampleRecipes.ts';
import { temporaryFolder } from './storeFolders.ts';

async function newShelf() {
  const dataFolder = await temporaryFolder();
  return { dataFolder, store: new PresetStore({ dataFolder, engineVersion: '1' }) };
}

const parameters = (brush: `${number}mm`) => ({ ...defaultParameters(), 'body.brush': brush });
const keep = (preset: Preset, brush: `${number}mm`, second: number) =>
  keepInPreset(preset, { parameters: parameters(brush), note: brush }, moment(second));
const ids = (preset: Preset) => preset.states.map((state) => state.id);

describe('built-in presets', () => {
  it('have one state of their own, with the same id wherever this version runs', async () => {
    const [one, other] = [await newShelf(), await newShelf()];
    const [here, there] = [await one.store.get('low-water'), await other.store.get('low-water')];
    expect(here).toMatchObject({ isBuiltIn: true, path: null, preset: { title: 'Low Water' } });
    expect(here.preset.states).toHaveLength(1);
    expect(ids(here.preset)).toEqual(ids(there.preset));
    expect(latestState(here.preset).parameters).toMatchObject({ 'body.brush': expect.any(String) });
  });

  it('stay as they are, and can be duplicated', async () => {
    const { store, dataFolder } = await newShelf();
    const { preset } = await store.get('low-water');
    await expect(store.save(keep(preset, '5mm', 1))).rejects.toThrow(
      /built-in presets stay as they are.*Duplicate/,
    );
    await expect(store.remove('low-water')).rejects.toThrow(/built-in/);
    const mine = await store.duplicate('low-water');
    expect(mine).toMatchObject({ name: 'low-water-2', title: 'Low Water 2' });
    await store.save(keep(mine, '5mm', 1));
    expect(await readdir(join(dataFolder, 'presets'))).toEqual(['low-water-2.json']);
    expect(ids((await store.get('low-water-2')).preset)).toHaveLength(2);
  });
});

describe("the user's presets", () => {
  it('are made, kept to, renamed and described; the name stays for ever', async () => {
    const { store } = await newShelf();
    const made = await store.create('Brume d’été', parameters('4mm'), moment(0), 'first try');
    expect(made.name).toBe('brume-d-ete');
    const renamed = describePreset(renamePreset(keep(made, '5mm', 1), 'Morning Mist'), 'For the far bank.');
    await store.save(renamed);
    expect((await store.get('brume-d-ete')).preset).toEqual(renamed);
    const back = returnInPreset(renamed, ids(renamed)[0], moment(2));
    expect(latestState(back)).toMatchObject({ number: 3, parent: ids(renamed)[0] });
    expect(() => renamePreset(made, '  ')).toThrow(RangeError);
  });

  it('of one title get names of their own', async () => {
    const { store } = await newShelf();
    for (const second of [0, 1]) await store.create('Low Water', parameters('4mm'), moment(second));
    const names = (await store.list()).presets.map(({ preset }) => `${preset.name}: ${preset.title}`);
    expect(names).toEqual(
      expect.arrayContaining([
        'low-water: Low Water',
        'low-water-2: Low Water 2',
        'low-water-3: Low Water 3',
      ]),
    );
  });

  it('saved by two windows hold every state of both', async () => {
    const { store, dataFolder } = await newShelf();
    const other = new PresetStore({ dataFolder, engineVersion: '1' });
    const made = await store.create('Dusk', parameters('4mm'), moment(0));
    const [ours, theirs] = [keep(made, '5mm', 1), keep(made, '6mm', 2)];
    await Promise.all([store.save(ours), other.save(theirs)]);
    const { preset, remarks } = await store.get('dusk');
    expect(new Set(ids(preset))).toEqual(new Set([...ids(ours), ...ids(theirs)]));
    expect(remarks).toEqual([]);
  });

  it('go to the bin and come back, even beside one that took their name', async () => {
    const { store } = await newShelf();
    const first = await store.create('Dusk', parameters('4mm'), moment(0));
    const binId = await store.remove('dusk');
    await expect(store.get('dusk')).rejects.toThrow(/no preset of this name.*low-water/);
    expect(await store.listBin()).toEqual([{ binId, preset: first }]);
    const second = await store.create('Dusk', parameters('9mm'), moment(1));
    const restored = await store.restore(binId);
    expect(restored).toMatchObject({ name: 'dusk-2', title: 'Dusk 2', states: first.states });
    expect((await store.get('dusk')).preset).toEqual(second);
    expect(await store.listBin()).toEqual([]);
    await expect(store.restore(binId)).rejects.toThrow(/no such preset in the bin/);
  });

  it('travel as one file and grow together where they know each other', async () => {
    const [here, there] = [await newShelf(), await newShelf()];
    const made = await here.store.create('Dusk', parameters('4mm'), moment(0));
    const text = await here.store.exportText(['dusk', 'low-water']);
    const imported = await there.store.importText(text, 'presets.json');
    expect(imported.map(({ preset, how }) => [preset.name, how])).toEqual([
      ['dusk', 'new'],
      ['low-water-2', 'renamed'],
    ]);
    expect((await there.store.get('dusk')).preset).toEqual(made);
    await there.store.save(keep(made, '5mm', 1));
    await here.store.save(keep(made, '6mm', 2));
    const [merged] = await here.store.importText(await there.store.exportText(['dusk']), 'presets.json');
    expect(merged).toMatchObject({ how: 'merged', preset: { states: { length: 3 } } });
  });

  it('are taken in as the single file that they are stored as', async () => {
    const { store } = await newShelf();
    const text = await readFile(new URL('../fixtures/recipes/preset-schema-1.json', import.meta.url), 'utf8');
    const [imported] = await store.importText(text, 'preset.json');
    // Its name is the built-in one's, which stays as it is.
    expect(imported).toMatchObject({ how: 'renamed', preset: { states: { length: 2 } } });
  });

  it.each([
    ['is cut off', (text: string) => text.slice(0, 300)],
    ['is something else', () => '{"format":"oxgall-recipe","schema":1}'],
    ['holds a state that was altered', (text: string) => text.replace('"4mm"', '"7mm"')],
    ['comes from the future', (text: string) => text.replace('"schema": 1', '"schema": 99')],
  ])('are not imported from a file that %s, and nothing is changed', async (_, spoil) => {
    const { store } = await newShelf();
    await store.create('Dusk', parameters('4mm'), moment(0));
    const before = await store.list();
    const spoilt = spoil(await store.exportText(['low-water', 'dusk']));
    await expect(store.importText(spoilt, 'presets.json')).rejects.toThrow(/^presets\.json: /);
    expect(await store.list()).toEqual(before);
  });
});

describe('a damaged preset', () => {
  it('cut off at any byte opens as the last whole copy and is put aside on saving', async () => {
    const { store, dataFolder } = await newShelf();
    const made = await store.create('Dusk', parameters('4mm'), moment(0));
    const path = join(dataFolder, 'presets', 'dusk.json');
    const whole = await readFile(path);
    for (let length = 0; length < whole.length - 1; length += 1 + (length % 29)) {
      await writeFile(path, whole.subarray(0, length));
      const found = await store.get('dusk');
      expect(found.preset, `cut at ${length}`).toEqual(made);
      expect(found.remarks).toEqual([expect.stringMatching(/dusk\.json.*last whole copy/)]);
      expect(await readFile(path)).toEqual(whole.subarray(0, length));
    }
    await writeFile(path, '{');
    await store.save(keep(made, '5mm', 1));
    expect(await readFile(`${path}.damaged`, 'utf8')).toBe('{');
    expect((await store.get('dusk')).remarks).toEqual([]);
  });

  it('without a copy is named, not touched, and its name not given away', async () => {
    const { store, dataFolder } = await newShelf();
    await store.create('Dawn', parameters('4mm'), moment(0));
    const path = join(dataFolder, 'presets', 'dusk.json');
    await writeFile(path, '{');
    const { problems, presets } = await store.list();
    expect(problems).toEqual([expect.stringMatching(/dusk\.json.*no earlier copy/)]);
    expect(presets.map(({ preset }) => preset.name)).toContain('dawn');
    expect((await store.create('Dusk', parameters('4mm'), moment(1))).name).toBe('dusk-2');
    expect(await readFile(path, 'utf8')).toBe('{');
  });

  it('from the future is named and not saved over', async () => {
    const { store, dataFolder } = await newShelf();
    const made = await store.create('Dusk', parameters('4mm'), moment(0));
    const path = join(dataFolder, 'presets', 'dusk.json');
    const text = (await readFile(path, 'utf8')).replace('"schema": 1', '"schema": 99');
    await writeFile(path, text);
    expect((await store.list()).problems).toEqual([expect.stringMatching(/newer Oxgall/)]);
    await expect(store.save(made)).rejects.toThrow(/newer Oxgall/);
    expect(await readFile(path, 'utf8')).toBe(text);
  });
});
