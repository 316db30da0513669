import { cp, mkdir, mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { photographs } from '../fixtures/photographs.ts';
import { runIn } from './runProgram.ts';

let folder: string;
let photo: string;

const run = (...words: string[]) => runIn(folder, words);

async function runJson(...words: string[]) {
  const { code, out, err } = await run(...words, '--json');
  expect(err).toBe('');
  return { code, told: JSON.parse(out) };
}

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'oxgall-recipes-'));
  photo = join(folder, 'ferry.jpg');
  await sharp(photographs.nagasakiBoats).resize(320).jpeg({ quality: 95 }).toFile(photo);
});
afterAll(() => rm(folder, { recursive: true, force: true }));

describe('recipes on the command line', () => {
  it('keep what was painted, and paint by it again with any workers', async () => {
    const first = await runJson(
      'paint',
      photo,
      '--keep',
      '--out',
      'one.png',
      '--set',
      'body.hold=0.5',
      '--print-long-edge',
      '180',
    );
    expect(first.code).toBe(0);
    expect(first.told).toMatchObject({ preset: 'low-water', recipe: `${photo}.oxgall.json` });
    const recipe = JSON.parse(await readFile(first.told.recipe, 'utf8'));
    const [history] = recipe.histories;
    expect(history.deliveries).toMatchObject([
      { path: 'one.png', pixelsSha256: first.told.pixelsSha256, engineVersion: first.told.engineVersion },
    ]);
    for (const workers of ['1', '2']) {
      const again = await runJson('paint', photo, '--out', `again${workers}.png`, '--workers', workers);
      expect(again.told.pixelsSha256).toBe(first.told.pixelsSha256);
      expect(again.told.remarks.join()).toMatch(/by its recipe: Low Water, State II/);
      expect(again.told.printLongEdgeMm).toBe(180);
    }
    // A preset that is named goes before the recipe.
    const other = await runJson('paint', photo, '--preset', 'brick-yard', '--out', 'brick.png');
    expect(other.told.preset).toBe('brick-yard');
    expect(other.told.pixelsSha256).not.toBe(first.told.pixelsSha256);
  });

  it('list, return and compare states', async () => {
    await runJson('paint', photo, '--keep', '--out', 'two.png', '--set', 'body.hold=0.7');
    const { told } = await runJson('states', photo);
    const [thread] = told.threads;
    expect(thread.states.map((state: { numeral: string }) => state.numeral)).toEqual(['I', 'II', 'III']);
    expect(thread.states[2]).toMatchObject({ isPresent: true, follows: 'II', changed: 'Hold 0.5 → 0.7.' });
    const plain = await run('states', photo);
    expect(plain.out).toMatch(/• III .*Hold 0\.5 → 0\.7/);

    const back = await runJson('return', photo, '--state', 'ii');
    expect(back.told).toMatchObject({ returnedTo: 2, state: 4 });
    const after = (await runJson('states', photo)).told.threads[0].states;
    expect(after.slice(0, 3)).toMatchObject(thread.states.map(({ id }: { id: string }) => ({ id })));
    expect(after[3]).toMatchObject({ isPresent: true, follows: 'II', changed: 'As State II.' });

    const compared = await runJson('compare', photo, '--states', 'I,3', '--out', 'both.png');
    expect(compared.told.differences).toMatchObject([{ key: 'body.hold', after: 0.7 }]);
    const size = await sharp(join(folder, 'both.png')).metadata();
    const one = await sharp(photo).metadata();
    expect(size.height).toBe(one.height);
    expect(size.width).toBeGreaterThan(2 * one.width!);
    // The right half is what painting by State III gives.
    const { data: right } = await sharp(join(folder, 'both.png'))
      .extract({ left: size.width! - one.width!, top: 0, width: one.width!, height: one.height! })
      .raw()
      .toBuffer({ resolveWithObject: true });
    const { data: alone } = await sharp(join(folder, 'two.png')).raw().toBuffer({ resolveWithObject: true });
    expect(right.equals(alone)).toBe(true);
  });

  it('verify a folder, also another copy of it elsewhere', async () => {
    const here = await runJson('verify', folder);
    expect(here.code).toBe(0);
    expect(here.told).toMatchObject({ deliveries: 2, identical: 2, problems: 0 });
    const elsewhere = join(folder, 'elsewhere');
    await mkdir(elsewhere);
    for (const name of ['ferry.jpg', 'ferry.jpg.oxgall.json', 'one.png', 'two.png'])
      await cp(join(folder, name), join(elsewhere, name));
    const there = await runJson('verify', elsewhere, '--workers', '1');
    expect(there.told).toMatchObject({ deliveries: 2, identical: 2 });
  });

  it('tell what differs, by how much, and why', async () => {
    const away = join(folder, 'away');
    await mkdir(away);
    for (const name of ['ferry.jpg', 'ferry.jpg.oxgall.json', 'one.png'])
      await cp(join(folder, name), join(away, name));
    const path = join(away, 'ferry.jpg.oxgall.json');
    const recipe = JSON.parse(await readFile(path, 'utf8'));
    const [first, second] = recipe.histories[0].deliveries;
    // As if another engine had painted the first: its hash is of other pixels; the second file is not there.
    const pixelsSha256 = `${'0'.repeat(8)}${first.pixelsSha256.slice(8)}`;
    const other = { ...first, pixelsSha256, engineVersion: '0' };
    recipe.histories[0].deliveries = [other, second];
    await writeFile(path, JSON.stringify(recipe));
    const { code, told } = await runJson('verify', join(away, 'ferry.jpg'));
    expect(code).toBe(1);
    expect(told.photos[0].deliveries).toMatchObject([
      // The file itself is what today's engine paints.
      { verdict: 'engine-differs', file: 'untouched', difference: { largest: 0, mean: 0, share01: 0 } },
      { verdict: 'identical', file: 'missing' },
    ]);
    await sharp(photographs.alliumOreophilum).resize(320).jpeg().toFile(join(away, 'ferry.jpg'));
    const changed = await runJson('verify', join(away, 'ferry.jpg'));
    expect(changed.told.photos[0].deliveries.map(({ verdict }: { verdict: string }) => verdict)).toEqual([
      'photo-changed',
      'photo-changed',
    ]);
  });

  it('refuse what is not there in one line that says what to do', async () => {
    const bare = join(folder, 'bare.jpg');
    await cp(photo, bare);
    const refusals: [string[], number, RegExp][] = [
      [['states', bare], 1, /bare\.jpg.*--keep/],
      [['states', 'no-such-preset'], 1, /no-such-preset.*Choose one of/],
      [['return', photo], 2, /--state/],
      [['return', photo, '--state', 'XL'], 2, /I to IV/],
      [['compare', photo, '--states', '1'], 2, /two states/],
      [['compare', photo, '--states', '1,2', '--out', photo], 1, /original/],
      [['verify', join(folder, 'nothing')], 1, /nothing/],
      [['paint', photo, '--preset', 'low-water@9'], 2, /I to I /],
    ];
    for (const [words, code, saying] of refusals) {
      const ended = await run(...words);
      expect(`${ended.err}${ended.out}`, words.join(' ')).toMatch(saying);
      expect(ended.code, words.join(' ')).toBe(code);
      expect(ended.err).not.toMatch(/\bat .*\.js:\d+/);
    }
  });

  it('know presets of one’s own, at any of their states', async () => {
    const own = join(folder, 'data', 'presets');
    await mkdir(own, { recursive: true });
    await cp(
      fileURLToPath(new URL('../fixtures/recipes/preset-schema-1.json', import.meta.url)),
      join(own, 'mine.json'),
    );
    const fixture = JSON.parse(await readFile(join(own, 'mine.json'), 'utf8'));
    await cp(join(own, 'mine.json'), join(own, `${fixture.name}.json`));
    await rm(join(own, 'mine.json'));
    expect((await run('presets')).out).toContain(`${fixture.name} `);
    const listed = await runJson('states', fixture.name);
    expect(listed.told.threads[0].states).toHaveLength(fixture.states.length);
    const painted = await runJson('paint', photo, '--preset', `${fixture.name}@I`, '--out', 'mine.png');
    expect(painted.told).toMatchObject({ preset: fixture.name, state: 1 });
  });
});
