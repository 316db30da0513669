import { mkdir, readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { temporaryFolder } from '../store/storeFolders.ts';
import { runIn } from './runProgram.ts';

describe('presets on the command line', () => {
  it('go out into one file and come in elsewhere, with all their states', async () => {
    const here = await temporaryFolder();
    await mkdir(join(here, 'data', 'presets'), { recursive: true });
    const fixture = new URL('../fixtures/recipes/preset-schema-1.json', import.meta.url);
    const [name, title] = ['odalys-at-dusk', 'Odalys at Dusk'];
    const preset = { ...JSON.parse(await readFile(fixture, 'utf8')), name, title };
    await writeFile(join(here, 'data', 'presets', `${name}.json`), JSON.stringify(preset));
    const { states } = preset;
    const out = await runIn(here, ['presets', 'export', name, 'reed-pen', '--out', 'hand.json']);
    expect(out).toMatchObject({ code: 0, err: '' });
    // Never over what is there.
    const again = await runIn(here, ['presets', 'export', name, '--out', 'hand.json']);
    expect(again.code).toBe(1);
    expect(again.err).toMatch(/hand\.json: is there already/);
    const there = await temporaryFolder();
    const imported = await runIn(there, ['presets', 'import', join(here, 'hand.json'), '--json']);
    expect(JSON.parse(imported.out).presets[0]).toEqual({ name, title, states: states.length });
    const listed = JSON.parse((await runIn(there, ['presets', '--json'])).out);
    expect(listed.find((preset: { name: string }) => preset.name === name)).toMatchObject({
      isBuiltIn: false,
      states: states.length,
    });
    const kept = JSON.parse((await runIn(there, ['states', name, '--json'])).out).threads[0].states;
    expect(kept.map(({ id }: { id: string }) => id)).toEqual(states.map(({ id }: { id: string }) => id));
  });

  it('refuse what cannot be in one line', async () => {
    const folder = await temporaryFolder();
    await writeFile(join(folder, 'torn.json'), '{"format":"oxgall-presets","sch');
    const refusals: [string[], number, RegExp][] = [
      [['presets', 'export'], 2, /names of presets/],
      [['presets', 'export', 'reed-pen'], 2, /--out/],
      [['presets', 'export', 'nothing-such', '--out', 'x.json'], 1, /Choose one of/],
      [['presets', 'import', 'torn.json'], 1, /torn\.json.*Export it again/],
      [['presets', 'import', 'gone.json'], 1, /gone\.json: there is no such file/],
      [['presets', 'rename'], 2, /export or import/],
      [['settings', '--recipes-elsewhere', 'torn.json'], 1, /torn\.json: is a file, not a folder/],
    ];
    for (const [words, code, saying] of refusals) {
      const ended = await runIn(folder, words);
      expect(ended.err, words.join(' ')).toMatch(saying);
      expect(ended.err.trim().split('\n'), words.join(' ')).toHaveLength(1);
      expect(ended.code, words.join(' ')).toBe(code);
    }
  });
});
