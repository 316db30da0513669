import { cp, link, mkdir, mkdtemp, readdir, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { framesOfShard } from '../../core/series/shards.ts';
import { RunLog, readRunLogs, runLogName } from '../../main/series/runLog.ts';
import { planSeries } from '../../main/series/seriesPlan.ts';
import { photographs } from '../fixtures/photographs.ts';
import { holdToUnbroken } from './killedRun.ts';
import { hashesOf, startProgram, writeFrames } from './runProgram.ts';

let folder: string;
let names: string[];
const run = (...words: string[]) => startProgram(join(folder, 'data'), words).ended;
const runJson = async (...words: string[]) => {
  const { code, out, err } = await run(...words, '--json');
  expect(err).toBe('');
  return { code, told: JSON.parse(out) };
};

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'oxgall-run-'));
  await mkdir(join(folder, 'photos'));
  names = await writeFrames(join(folder, 'photos'), photographs.nagasakiBoats, 6, 260);
});
afterAll(() => rm(folder, { recursive: true, force: true }));

describe('oxgall series', () => {
  it('paints every frame, matched to the first, and tells of each', async () => {
    const { code, told } = await runJson('series', join(folder, 'photos'), '--out', join(folder, 'out'));
    expect(code).toBe(0);
    expect(told).toMatchObject({ lead: 'plate 1.jpg', match: 1, painted: 6, kept: 0, failed: 0 });
    expect(told.frames.map(({ name }: { name: string }) => name)).toEqual(names);
    const hashes = await hashesOf(join(folder, 'out'));
    for (const frame of told.frames) {
      expect(frame.sha256).toBe(hashes[frame.output.split('/').at(-1)]);
      expect(frame.figures.after.lineCoverage01).toBeGreaterThan(0);
      if (frame.name === told.lead) expect(frame.figures.after).toEqual(frame.figures.before);
    }
    const painted = (await readRunLogs(join(folder, 'out'))).filter(({ kind }) => kind === 'painted');
    expect(painted.map(({ preset }) => preset)).toEqual(names.map(() => 'Low Water · I'));
    // The lead is painted as it would be alone, to the bit.
    const alone = await runJson(
      'paint',
      join(folder, 'photos', 'plate 1.jpg'),
      '--depth',
      '8',
      '--out',
      join(folder, 'alone.png'),
    );
    expect(told.frames[0].pixelsSha256).toBe(alone.told.pixelsSha256);
  });

  it('goes on with nothing painted again, and with a reason where something is', async () => {
    const again = (...more: string[]) =>
      runJson('series', join(folder, 'photos'), '--out', join(folder, 'out'), '--resume', ...more);
    expect((await again()).told).toMatchObject({ painted: 0, kept: 6 });
    await rm(join(folder, 'out', 'plate 2.png'));
    await writeFile(join(folder, 'out', 'plate 3.png'), 'by another hand');
    const mended = (await again()).told;
    expect(mended).toMatchObject({ painted: 2, kept: 4 });
    expect(mended.frames[1].reason).toMatch(/not there/);
    expect(mended.frames[2].reason).toMatch(/changed/);
    const other = (await again('--set', 'body.hold=0.5')).told;
    expect(other).toMatchObject({ painted: 6, kept: 0 });
    expect(other.frames[0].reason).toMatch(/look/);
    expect((await readFile(join(folder, 'out', 'plate 3.changed.png'), 'utf8')).toString()).toBe(
      'by another hand',
    );
    expect((await readdir(join(folder, 'out'))).length).toBe(8);
  });

  it('paints again where strata are gone, and puts those aside that another hand has changed', async () => {
    const out = join(folder, 'with strata');
    const again = (...more: string[]) =>
      runJson('series', join(folder, 'photos'), '--out', out, '--layers', 'ora', '--resume', ...more);
    expect((await again()).told).toMatchObject({ painted: 6 });
    await rm(join(out, 'plate 1.ora'));
    const mended = (await again()).told;
    expect(mended).toMatchObject({ painted: 1, kept: 5 });
    expect(mended.frames[0].reason).toMatch(/strata/);
    await writeFile(join(out, 'plate 2.ora'), 'by another hand');
    const other = (await again('--set', 'body.hold=0.5')).told;
    expect(other).toMatchObject({ painted: 6 });
    expect(other.frames[1].remarks.join()).toContain('plate 2.changed.ora');
    expect(await readFile(join(out, 'plate 2.changed.ora'), 'utf8')).toBe('by another hand');
    expect((await readdir(out)).filter((name) => name.endsWith('.ora'))).toHaveLength(7);
  });

  it('is the same by shards as in one run', async () => {
    const photos = join(folder, 'photos');
    await runJson('series', photos, '--out', join(folder, 'one'));
    const painted: string[] = [];
    for (const shard of ['1/3', '2/3', '3/3']) {
      const part = await runJson('series', photos, '--out', join(folder, 'parts'), '--shard', shard);
      painted.push(...part.told.frames.map(({ name }: { name: string }) => name));
      expect(part.told.painted).toBe(part.told.frames.length);
    }
    expect(painted.sort()).toEqual([...names].sort());
    expect(await hashesOf(join(folder, 'parts'))).toEqual(await hashesOf(join(folder, 'one')));
  });

  it('names what cannot be painted and goes on', async () => {
    const mixed = join(folder, 'mixed');
    await mkdir(mixed);
    for (const name of names.slice(0, 2)) await cp(join(folder, 'photos', name), join(mixed, name));
    await writeFile(join(mixed, 'a torn one.jpg'), (await readFile(join(mixed, names[0]))).subarray(0, 4000));
    await writeFile(join(mixed, 'empty.png'), '');
    await writeFile(join(mixed, 'notes.txt'), 'low water at six');
    await sharp(join(mixed, names[0])).png().toFile(join(mixed, 'plate 1.png'));
    const { code, told } = await runJson('series', mixed, '--out', join(folder, 'mixed out'));
    expect(code).toBe(1);
    expect(told.others).toMatchObject([{ name: 'notes.txt' }]);
    const state = Object.fromEntries(
      told.frames.map((frame: { name: string; state: string }) => [frame.name, frame.state]),
    );
    expect(state).toEqual({
      'a torn one.jpg': 'failed',
      'empty.png': 'failed',
      'plate 1.jpg': 'painted',
      'plate 1.png': 'painted',
      'plate 2.jpg': 'painted',
    });
    for (const frame of told.frames) if (frame.state === 'failed') expect(frame.reason).toContain(frame.name);
    expect(Object.keys(await hashesOf(join(folder, 'mixed out')))).toEqual([
      'plate 1.jpg.png',
      'plate 1.png.png',
      'plate 2.png',
    ]);
  });

  it('never writes over somebody else’s file, nor over a photo', async () => {
    const out = join(folder, 'taken');
    await mkdir(out);
    await writeFile(join(out, 'plate 1.png'), 'mine');
    // A photo under the name of a painting, by way of a link.
    await link(join(folder, 'photos', names[1]), join(out, 'plate 2.png'));
    const before = await readFile(join(folder, 'photos', names[1]));
    const { told } = await runJson('series', join(folder, 'photos'), '--out', out);
    expect(told.painted).toBe(6);
    expect(await readFile(join(out, 'plate 1.png'), 'utf8')).toBe('mine');
    expect((await readFile(join(folder, 'photos', names[1]))).equals(before)).toBe(true);
    expect(Object.keys(await hashesOf(out))).toContain('plate 1 2.png');
    const into = await run('series', join(folder, 'photos'), '--out', join(folder, 'photos'));
    expect([into.code, into.err]).toEqual([1, expect.stringMatching(/another folder/)]);
  });

  it('lets no second run into its folder', async () => {
    const out = join(folder, 'locked');
    await mkdir(out);
    const own = JSON.stringify({ host: (await import('node:os')).hostname(), processId: process.pid });
    await writeFile(join(out, `.${runLogName(null)}.lock`), own);
    const second = await run('series', join(folder, 'photos'), '--out', out);
    expect([second.code, second.err]).toEqual([1, expect.stringMatching(/another run/)]);
    // A holder that is no more is none.
    await writeFile(join(out, `.${runLogName(null)}.lock`), own.replace(String(process.pid), '999999999'));
    expect((await run('series', join(folder, 'photos'), '--out', out)).code).toBe(0);
  });

  it('ends as an unbroken run after kills at random moments', async () => {
    await holdToUnbroken(photographs.nagasakiBoats, { frames: 8, widthPx: 400, kills: 6, longestMs: 1800 });
  });
});

describe('the run log', () => {
  it('opens wherever it was cut off, with what was whole before', async () => {
    const place = await mkdtemp(join(folder, 'log-'));
    const log = await RunLog.open(place, runLogName(null));
    for (let i = 0; i < 4; i++)
      await log.append({ kind: 'begun', name: `plate ${i}.jpg`, key: 'k', output: `plate ${i}.png` });
    await log.close();
    const path = join(place, runLogName(null));
    const whole = await readFile(path);
    const lines = whole.toString().split('\n').filter(Boolean);
    for (let length = 0; length <= whole.length; length++) {
      await writeFile(path, whole.subarray(0, length));
      const complete = lines.filter((_, i) => lines.slice(0, i + 1).join('\n').length <= length).length;
      expect((await readRunLogs(place)).length).toBe(complete);
    }
    // A torn end does not swallow the next line.
    await writeFile(path, whole.subarray(0, whole.length - 10));
    const next = await RunLog.open(place, runLogName(null));
    await next.append({ kind: 'failed', name: 'late.jpg', key: 'k', reason: 'gone' });
    await next.close();
    expect((await readRunLogs(place)).map(({ kind }) => kind)).toEqual(['begun', 'begun', 'begun', 'failed']);
  });
});

describe('shards', () => {
  it('are disjoint and together everything, for any number', async () => {
    const { frames } = await planSeries(join(folder, 'photos'), 'png');
    for (let count = 1; count <= 8; count++) {
      const parts = Array.from({ length: count }, (_, i) => framesOfShard(frames, { index: i + 1, count }));
      expect(
        parts
          .flat()
          .map(({ name }) => name)
          .sort(),
      ).toEqual(frames.map(({ name }) => name).sort());
    }
  });
});
