import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { parameterKeys } from '../../core/parameters/table.ts';
import { loadBuiltInPresets } from '../../main/store/builtInPresets.ts';

describe('built-in presets', () => {
  let folder: string;
  beforeEach(async () => {
    folder = await mkdtemp(join(tmpdir(), 'oxgall-built-in-'));
  });
  afterEach(async () => {
    await rm(folder, { recursive: true });
  });

  const author = (name: string, changes: Record<string, unknown> = {}) =>
    writeFile(
      join(folder, name),
      JSON.stringify({
        format: 'oxgall-built-in-preset',
        schema: 1,
        title: 'Heron',
        summary: 'Grey planes.',
        parameters: {},
        ...changes,
      }),
    );

  it('ships presets that all hold every parameter', async () => {
    const presets = await loadBuiltInPresets();
    expect(presets.map((preset) => preset.name)).toContain('low-water');
    for (const preset of presets)
      expect(Object.keys(preset.parameters).sort()).toEqual([...parameterKeys].sort());
  });

  it('lays the authored values over the defaults', async () => {
    await author('heron.json', { parameters: { 'body.brush': '5mm' } });
    const [heron] = await loadBuiltInPresets(folder);
    expect(heron).toMatchObject({ name: 'heron', title: 'Heron', parameters: { 'body.brush': '5mm' } });
    expect(heron.parameters['body.coats']).toBe(2);
  });

  it.each([
    [
      'a value outside its range',
      { parameters: { 'body.coats': 9 } },
      /from 0 to 6 for body\.coats, received 9/,
    ],
    ['an unknown parameter', { parameters: { 'body.glitter': 1 } }, /for body\.glitter, received 1/],
    ['an unknown field', { author: 'Odalys Brook' }, /Expected no author/],
    ['a missing title', { title: undefined }, /Expected a text for title, received nothing/],
    ['another format', { format: 'other' }, /"oxgall-built-in-preset" for format, received "other"/],
  ])('refuses %s, naming the file', async (_, changes, message) => {
    await author('heron.json', changes);
    await expect(loadBuiltInPresets(folder)).rejects.toThrow(message);
    await expect(loadBuiltInPresets(folder)).rejects.toThrow(join(folder, 'heron.json'));
  });

  it('refuses a file name that is not kebab case', async () => {
    await author('Heron One.json');
    await expect(loadBuiltInPresets(folder)).rejects.toThrow(/kebab case/);
  });
});
