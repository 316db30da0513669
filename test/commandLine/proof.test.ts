import { execFile } from 'node:child_process';
import { copyFile, mkdir, readdir, readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { documentText } from '../../core/recipes/openDocument.ts';
import { changeParameters } from '../../core/recipes/recipeHistory.ts';
import { temporaryFolder } from '../files/temporaryFolder.ts';
import { photographs } from '../fixtures/photographs.ts';
import { noPoppler, pdfText, takePictures } from '../proof/poppler.ts';
import { sampleRecipe } from '../recipes/sampleRecipes.ts';

const program = fileURLToPath(new URL('../../dist/main/commandLine.js', import.meta.url));
const folder = temporaryFolder();

function run(...words: string[]): Promise<{ code: number; out: string; err: string }> {
  return new Promise((resolve) => {
    const child = execFile(
      process.execPath,
      [program, 'proof', ...words],
      { cwd: folder.path('.') },
      (_, out, err) => resolve({ code: child.exitCode!, out, err }),
    );
  });
}

async function series(name: string, plates: Record<string, string>): Promise<string> {
  const path = folder.path(name);
  await mkdir(path);
  for (const [plate, photo] of Object.entries(plates)) await copyFile(photo, join(path, plate));
  return path;
}

describe('oxgall proof', () => {
  it('sets a folder in natural order, under its name, and never over an earlier sheet', async () => {
    const path = await series('Low Water', {
      'plate 10.jpg': photographs.nagasakiBoats,
      'plate 9.jpg': photographs.dustBowlHome,
      'plate 1.jpg': photographs.alliumOreophilum,
    });
    await writeFile(join(path, 'notes.txt'), 'not a picture');
    const first = await run(path, '--json');
    expect(first).toMatchObject({ code: 0, err: '' });
    const told = JSON.parse(first.out);
    expect(told).toMatchObject({ frames: 3, pages: 1, faults: [], remarks: [] });
    expect(told.files).toEqual([join(path, 'Low Water.proof.pdf')]);
    const second = await run(path, '--paper', 'letter', '--landscape', '--columns', '2');
    expect(second.out).toContain('Low Water.proof 2.pdf');
    expect(second.out).toContain('3 frames on ');
    expect(await readdir(path)).toHaveLength(6);
    if (noPoppler) return;
    const text = await pdfText(told.files[0]);
    const places = ['plate 1.jpg', 'plate 9.jpg', 'plate 10.jpg'].map((plate) => text.indexOf(plate));
    expect(Math.min(...places)).toBeGreaterThan(0);
    expect(places).toEqual([...places].sort((one, other) => one - other));
    expect(text).toContain('Low Water');
  });

  it('leaves its own pages out of the next sheet', async () => {
    const path = await series('cards', {
      'a.jpg': photographs.nagasakiBoats,
      'b.jpg': photographs.dustBowlHome,
    });
    const out = join(path, 'cards.proof.png');
    const words = ['--out', out, '--paper', '80x120', '--columns', '1', '--margin', '6', '--json'];
    const first = JSON.parse((await run(path, ...words)).out);
    expect(first.files).toHaveLength(2);
    expect(JSON.parse((await run(path, ...words)).out)).toMatchObject({ frames: 2, pages: 2 });
  });

  it('paints photos that have a recipe, and says preset and state', async (context) => {
    if (noPoppler) return context.skip(noPoppler);
    const path = await series('recipes', {
      'as it is.jpg': photographs.nagasakiBoats,
      'with recipe.jpg': photographs.nagasakiBoats,
    });
    // Paper over everything and nothing laid on it: a plain sheet of a known colour.
    const look = { 'ground.paper': 1, 'ground.colour': '#336699', 'body.strength': 0, 'line.strength': 0 };
    const recipe = changeParameters(sampleRecipe(), look);
    await writeFile(join(path, 'with recipe.jpg.oxgall.json'), documentText(recipe));
    const { files } = JSON.parse((await run(path, '--columns', '2', '--json')).out);
    expect(await pdfText(files[0])).toContain('Low Water · I, with changes');
    await takePictures(files[0], folder.path('recipe'));
    const { channels } = await sharp(folder.path('recipe-001.jpg')).stats();
    [0x33, 0x66, 0x99].forEach((value, k) => {
      expect(Math.abs(channels[k].mean - value)).toBeLessThan(2);
      expect(channels[k].stdev).toBeLessThan(1);
    });
    const other = await sharp(folder.path('recipe-000.jpg')).stats();
    expect(other.channels[0].stdev).toBeGreaterThan(10);
  });

  it('shows what a damaged recipe or picture is, and ends with 1 where a picture is missing', async () => {
    const path = await series('damaged', {
      'a.jpg': photographs.nagasakiBoats,
      'b.jpg': photographs.nagasakiBoats,
    });
    await writeFile(join(path, 'a.jpg.oxgall.json'), '{"format":');
    const whole = await readFile(photographs.nagasakiBoats);
    await writeFile(join(path, 'c.jpg'), whole.subarray(0, 9000));
    const { code, out, err } = await run(path);
    expect(code).toBe(1);
    expect(out).toContain('3 frames on 1 page');
    expect(err).toMatch(/a\.jpg\.oxgall\.json: This is no whole recipe/);
    expect(err).toMatch(/c\.jpg: is cut off before its end/);
    expect(err).not.toMatch(/\bat .*\.js:\d+/);
  });

  it('refuses words that are off', async () => {
    const path = await series('refused', { 'a.jpg': photographs.nagasakiBoats });
    const empty = await series('empty', {});
    for (const [words, code, saying] of [
      [[], 2, /Expected one folder, received none/],
      [[path, '--paper', 'B9'], 2, /Expected one of a5, a4.*for --paper, received B9/],
      [[path, '--columns', '0'], 2, /from 1 to 24 for --columns/],
      [[path, '--columns', '12'], 2, /Expected at most 8 columns on this paper/],
      [[path, '--margin', '90'], 2, /Expected/],
      [[path, '--out', 'sheet.docx'], 1, /sheet\.docx: a proof sheet is a PDF or a PNG/],
      [[path, '--out', join(path, 'none', 'sheet.pdf')], 1, /there is no folder/],
      [[empty], 1, /empty: holds no pictures/],
      [[join(path, 'a.jpg')], 1, /a\.jpg: .*not a folder/],
      [[join(path, 'nowhere')], 1, /nowhere: there is no such/],
    ] as const) {
      const ended = await run(...words);
      expect(ended.err).toMatch(saying);
      expect(ended.err.trimEnd().split('\n')).toHaveLength(1);
      expect(ended.code).toBe(code);
    }
    expect(await readdir(path)).toEqual(['a.jpg']);
  });
});
