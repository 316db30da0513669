import { spawn } from 'node:child_process';
import { cp, readdir, readFile, symlink } from 'node:fs/promises';
import { fileURLToPath } from 'node:url';
import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { temporaryFolder } from '../files/temporaryFolder.ts';
import { photographs } from '../fixtures/photographs.ts';
import { plainPng, pngColour } from '../fixtures/plainPng.ts';

const program = fileURLToPath(new URL('../../dist/main/commandLine.js', import.meta.url));
const folder = temporaryFolder();

interface Ended {
  code: number | null;
  signal: NodeJS.Signals | null;
  out: string;
  err: string;
}

function start(words: string[]) {
  const child = spawn(process.execPath, [program, ...words], {
    cwd: folder.path('.'),
    env: { ...process.env, OXGALL_DATA: folder.path('.oxgall-data') },
  });
  let [out, err] = ['', ''];
  child.stdout.on('data', (text) => {
    out += text;
  });
  child.stderr.on('data', (text) => {
    err += text;
  });
  const ended = new Promise<Ended>((resolve) =>
    child.on('close', (code, signal) => resolve({ code, signal, out, err })),
  );
  return { child, ended };
}

const run = (...words: string[]) => start(words).ended;
const namesThere = async () => (await readdir(folder.path('.'))).sort();

/** One line that names the file or key and says what to do; no stack; nothing left behind. */
async function expectRefusal(words: string[], code: 1 | 2, saying: RegExp): Promise<void> {
  const before = await namesThere();
  const { code: own, err, out } = await run(...words);
  expect(err).toMatch(saying);
  expect(err.trimEnd().split('\n')).toHaveLength(1);
  expect(err).not.toMatch(/\bat .*\.js:\d+|node:internal/);
  expect(out).toBe('');
  expect(own).toBe(code);
  expect(await namesThere()).toEqual(before);
}

describe('oxgall paint', () => {
  it('paints a photograph, and the same pixels with any workers and again', async () => {
    const hashes = new Set<string>();
    for (const workers of ['1', '2', '2']) {
      const { code, out } = await run(
        'paint',
        photographs.nagasakiBoats,
        '--out',
        `w${workers}.png`,
        '--workers',
        workers,
        '--json',
      );
      expect(code).toBe(0);
      const told = JSON.parse(out);
      expect(told).toMatchObject({
        width: 1024,
        height: 819,
        output: `w${workers}.png`,
        preset: 'low-water',
      });
      expect(Object.keys(told.milliseconds)).toEqual([
        'decode',
        'grain',
        'body',
        'line',
        'relief',
        'compose',
        'encode',
        'total',
      ]);
      expect(told.peakMemoryBytes).toBeGreaterThan(2e7);
      expect(told.parameters['body.method']).toBe('multi-scale');
      hashes.add(told.pixelsSha256);
    }
    expect(hashes.size).toBe(1);
    const { width, height, channels } = await sharp(folder.path('w1.png')).metadata();
    expect([width, height, channels]).toEqual([1024, 819, 3]);
  });

  it.each(['grain-wise', 'sectors', 'quadrant', 'bilateral'])('paints with the method %s', async (method) => {
    const settings = ['--set', `body.method=${method}`, '--set', 'body.brush=12px'];
    const { code } = await run('paint', photographs.alliumOreophilum, ...settings, '--out', `${method}.tif`);
    expect(code).toBe(0);
    expect((await sharp(folder.path(`${method}.tif`)).metadata()).format).toBe('tiff');
  });

  it.each([
    ['1 × 1', 1, 1],
    ['1 × 5000', 1, 5000],
    ['5000 × 1', 5000, 1],
  ])('paints a small valid picture: %s', async (name, width, height) => {
    const photo = folder.path('small.png');
    await sharp({ create: { width, height, channels: 3, background: '#b04030' } })
      .png()
      .toFile(photo);
    const { code } = await run('paint', 'small.png', '--out', `${name.replaceAll(' ', '')}.png`);
    expect(code).toBe(0);
  });

  it('refuses what is no photo', async () => {
    const whole = await readFile(photographs.dustBowlHome);
    await folder.file('empty.jpg', '');
    await folder.file('text.jpg', 'a letter, not a picture\n');
    await folder.file('cut.jpg', whole.subarray(0, 40_000));
    await expectRefusal(['paint', 'missing.jpg', '--out', 'x.png'], 1, /missing\.jpg: there is no such file/);
    await expectRefusal(['paint', '.', '--out', 'x.png'], 1, /is a folder/);
    await expectRefusal(['paint', 'empty.jpg', '--out', 'x.png'], 1, /empty\.jpg: is empty/);
    await expectRefusal(['paint', 'text.jpg', '--out', 'x.png'], 1, /text\.jpg: holds text/);
    await expectRefusal(['paint', 'cut.jpg', '--out', 'x.png'], 1, /cut\.jpg: is cut off/);
  });

  it('refuses a picture of no pixels', async () => {
    const png = plainPng({ widthPx: 0, heightPx: 0, bits: 8, colourType: pngColour.rgb, rows: [] });
    await folder.file('zero.png', png);
    await expectRefusal(['paint', 'zero.png', '--out', 'x.png'], 1, /zero\.png: is damaged.*\. \S/);
  });

  it('paints a photo with flipped bits or refuses it in one line', async () => {
    const whole = await readFile(photographs.dustBowlHome);
    await folder.file('flipped.jpg', whole);
    for (const at of [30, 700, 90_000, 200_000]) {
      const before = (await namesThere()).filter((name) => name !== 'flipped.png');
      const bytes = Buffer.from(whole);
      bytes[at] ^= 0x55;
      await folder.file('flipped.jpg', bytes);
      const { code, err } = await run('paint', 'flipped.jpg', '--out', 'flipped.png');
      expect([0, 1]).toContain(code);
      expect((await namesThere()).filter((name) => name !== 'flipped.png')).toEqual(before);
      expect(err).not.toMatch(/\bat .*\.js:\d+/);
      if (code === 1) expect(err.trimEnd().split('\n')).toHaveLength(1);
    }
  });

  it('refuses wrong words with exit code 2', async () => {
    const photo = photographs.nagasakiBoats;
    await expectRefusal(['paint', photo, '--out', 'x.png', '--set', 'body.shine=1'], 2, /body\.shine/);
    await expectRefusal(
      ['paint', photo, '--out', 'x.png', '--set', 'body.coats=9'],
      2,
      /from 0 to 6 for body\.coats/,
    );
    await expectRefusal(
      ['paint', photo, '--out', 'x.png', '--set', 'body.brush=12'],
      2,
      /a length with its unit/,
    );
    await expectRefusal(['paint', photo, '--out', 'x.png', '--preset', 'nobody'], 2, /one of the presets/);
    await expectRefusal(['paint', photo, '--out', 'x.png', '--workers', '0'], 2, /--workers/);
    await expectRefusal(['paint'], 2, /one photo/);
    await expectRefusal(['whitewash'], 2, /one of the commands/);
    await expectRefusal(['paint', photo, '--gloss'], 2, /--gloss/);
  });

  it('puts the painting beside the photo where no output is named, with a number where that is taken', async () => {
    await cp(photographs.frenchAlpineLandscape, folder.path('hills.jpg'));
    const words = ['paint', 'hills.jpg', '--set', 'body.method=quadrant', '--json'];
    expect(JSON.parse((await run(...words)).out).output).toMatch(/hills\.painted\.png$/);
    expect(JSON.parse((await run(...words)).out).output).toMatch(/hills\.painted-2\.png$/);
  });

  it('is silent where the output is no terminal, but for the line that says what was made', async () => {
    const { code, out, err } = await run('paint', photographs.locomotionHouseCat, '--out', 'cat.webp');
    expect(code).toBe(0);
    expect(err).toBe('');
    expect(out).toMatch(/^cat\.webp {2}1024 × \d+ px in [\d.]+ s\n$/);
  });

  it('refuses outputs that cannot or must not be written', async () => {
    await cp(photographs.alliumOreophilum, folder.path('flower.jpg'));
    await symlink('flower.jpg', folder.path('other-name.jpg'));
    const original = await readFile(folder.path('flower.jpg'));
    await expectRefusal(['paint', 'flower.jpg', '--out', 'flower.jpg'], 1, /is the photo itself/);
    await expectRefusal(['paint', 'flower.jpg', '--out', 'other-name.jpg'], 1, /is the photo itself/);
    await expectRefusal(['paint', 'flower.jpg', '--out', 'nowhere/x.png'], 1, /there is no folder/);
    await expectRefusal(['paint', 'flower.jpg', '--out', 'flower.jpg/x.png'], 1, /is not a folder/);
    await expectRefusal(['paint', 'flower.jpg', '--out', 'x.bmp'], 1, /not a format written here/);
    await expectRefusal(['paint', 'flower.jpg', '--out', '.'], 1, /\. \S/);
    // Permissions do not bind root; the folder of processes takes no files from anyone.
    if (process.platform === 'linux')
      await expectRefusal(
        ['paint', 'flower.jpg', '--out', '/proc/x.png'],
        1,
        /nothing may be written to "\/proc"/,
      );
    expect(await readFile(folder.path('flower.jpg'))).toEqual(original);
  });

  it('stops within 200 ms of an interrupt and leaves nothing half-written', async () => {
    const large = folder.path('large.jpg');
    await sharp(photographs.nagasakiBoats).resize(5000).toFile(large);
    const before = await namesThere();
    for (const waitMs of [600, 1500]) {
      const { child, ended } = start(['paint', 'large.jpg', '--out', 'large.tif']);
      await new Promise((resolve) => setTimeout(resolve, waitMs));
      const sentMs = performance.now();
      child.kill('SIGINT');
      const { signal } = await ended;
      // Measured to the parent's notice of it, on whatever else the machine is doing.
      expect(performance.now() - sentMs).toBeLessThan(process.env.OXGALL_STRICT ? 200 : 800);
      expect(signal).toBe('SIGINT');
      expect(await namesThere()).toEqual(before);
    }
  });
});

describe('oxgall presets and params', () => {
  it('list what there is', async () => {
    const presets = JSON.parse((await run('presets', '--json')).out) as { name: string }[];
    expect(presets.map(({ name }) => name)).toEqual(
      expect.arrayContaining([
        'low-water',
        'heron-quill',
        'market-awning',
        'rain-on-slate',
        'reed-pen',
        'morning-haze',
      ]),
    );
    expect(Object.keys(JSON.parse((await run('params', '--json')).out))).toContain('line.threshold');
    expect((await run('params')).out).toMatch(/body\.brush \(3\.2mm\)/);
    expect((await run('help', 'paint')).out).toMatch(/--set KEY=VALUE/);
  });

  it('give looks that differ on a photograph', { timeout: 240_000 }, async () => {
    const presets = JSON.parse((await run('presets', '--json')).out) as { name: string }[];
    const pictures: Buffer[] = [];
    for (const { name } of presets) {
      await run('paint', photographs.frenchAlpineLandscape, '--preset', name, '--out', `${name}.png`);
      pictures.push(
        await sharp(folder.path(`${name}.png`))
          .raw()
          .toBuffer(),
      );
    }
    for (let i = 0; i < pictures.length; i++)
      for (let j = 0; j < i; j++) {
        const apart = pictures[i].reduce((sum, value, at) => sum + Math.abs(value - pictures[j][at]), 0);
        expect(apart / pictures[i].length, `${presets[i].name} and ${presets[j].name}`).toBeGreaterThan(1.5);
      }
  });
});
