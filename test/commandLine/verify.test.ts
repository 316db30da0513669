import { createHash } from 'node:crypto';
import { cp, mkdtemp, readdir, readFile, rename, rm, stat, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import sharp from 'sharp';
import { beforeAll, describe, expect, it } from 'vitest';
import { photographs } from '../fixtures/photographs.ts';
import { makeReadOnly, mountDisk, temporaryFolder } from '../store/storeFolders.ts';
import { runIn } from './runProgram.ts';

// One photo painted twice and kept, made once; every test works on a copy of its own.
let kept: string;
beforeAll(async () => {
  kept = await mkdtemp(join(tmpdir(), 'oxgall-verify-'));
  await sharp(photographs.nagasakiBoats).resize(160).jpeg({ quality: 95 }).toFile(join(kept, 'ferry.jpg'));
  for (const [out, hold] of [
    ['one.png', '0.5'],
    ['two.jpg', '0.7'],
  ])
    await runIn(kept, ['paint', 'ferry.jpg', '--keep', '--out', out, '--set', `body.hold=${hold}`]);
  return () => rm(kept, { recursive: true, force: true });
});

async function copyOfKept(folder?: string): Promise<string> {
  const copy = folder ?? (await temporaryFolder());
  for (const name of await readdir(kept))
    if (name !== 'data') await cp(join(kept, name), join(copy, name), { recursive: true });
  return copy;
}

/** Runs with a data folder that knows nothing of the photo, as on another machine. */
async function verify(folder: string, ...words: string[]) {
  const { code, out, err } = await runIn(folder, ['verify', ...words, '--json']);
  return { code, err, told: JSON.parse(out) };
}

const deliveriesOf = (told: { photos: { deliveries: unknown[] }[] }) =>
  told.photos.flatMap(({ deliveries }) => deliveries);

describe('oxgall verify', () => {
  it('proves a folder in another place, with a worker more or less', async () => {
    const folder = await copyOfKept();
    for (const workers of ['1', '2']) {
      const { code, told } = await verify(folder, '.', '--workers', workers);
      expect(code).toBe(0);
      expect(told).toMatchObject({ deliveries: 2, identical: 2, changedFiles: 0, missingFiles: 0 });
      expect(deliveriesOf(told)).toMatchObject([
        { path: 'one.png', state: 2, verdict: 'identical', file: 'untouched', difference: null },
        { path: 'two.jpg', state: 3, verdict: 'identical', file: 'untouched', difference: null },
      ]);
    }
    const plain = await runIn(folder, ['verify', 'ferry.jpg']);
    expect(plain.out).toMatch(/one\.png, State II: identical\n.*two\.jpg, State III: identical\n2 of 2/);
  });

  it('proves files that were made with more, or with less, than their recipe asks for', async () => {
    const folder = await copyOfKept();
    const data = join(folder, 'own data');
    const print = ['--crop', '1:1', '--ppi', '40', '--bleed', '2', '--profile', 'p3'];
    await runIn(folder, ['paint', 'ferry.jpg', '--keep', '--out', 'square.tif', ...print], data);
    await runIn(folder, ['paint', 'ferry.jpg', '--keep', '--out', 'same.jpg'], data);
    const whole = ['--keep', '--preset', 'reed-pen', '--out', 'whole.png'];
    await runIn(folder, ['paint', 'ferry.jpg', ...whole], data);
    // Somebody looks at it in the meantime: the frame is the recipe's still.
    const recipe = JSON.parse(await readFile(join(folder, 'ferry.jpg.oxgall.json'), 'utf8'));
    expect(recipe.work.output).toMatchObject({ bleedMm: 2, cropFrame: { aspect: 1 } });
    const { told } = await verify(folder, '.');
    expect(told).toMatchObject({ deliveries: 5, identical: 5 });
  });

  it('passes where files are elsewhere by now, and fails where one was changed', async () => {
    const folder = await copyOfKept();
    await rm(join(folder, 'one.png'));
    const missing = await verify(folder, '.');
    expect(missing.code).toBe(0);
    expect(missing.told).toMatchObject({ identical: 2, missingFiles: 1 });
    await sharp(join(kept, 'two.jpg')).negate().toFile(join(folder, 'two.jpg'));
    const changed = await verify(folder, '.');
    expect(changed.code).toBe(1);
    expect(changed.told).toMatchObject({ identical: 2, changedFiles: 1 });
  });

  it('says by how much a file differs, figured out independently', async () => {
    const folder = await copyOfKept();
    // Somebody delivered another picture under this hash: the painting with its lightest samples cut.
    const { data, info } = await sharp(join(kept, 'one.png')).raw().toBuffer({ resolveWithObject: true });
    let [sum, count, largest] = [0, 0, 0];
    const cut = data.map((sample) => {
      const other = Math.min(sample, 180);
      sum += sample - other;
      if (sample !== other) count++;
      largest = Math.max(largest, sample - other);
      return other;
    });
    const { width, height, channels } = info;
    await sharp(cut, { raw: { width, height, channels } }).png().toFile(join(folder, 'one.png'));
    const hashOf = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex');
    const path = join(folder, 'ferry.jpg.oxgall.json');
    const recipe = JSON.parse(await readFile(path, 'utf8'));
    const sha256 = hashOf(await readFile(join(folder, 'one.png')));
    Object.assign(recipe.histories[0].deliveries[0], { sha256, pixelsSha256: hashOf(cut) });
    await writeFile(path, JSON.stringify(recipe));
    const { code, told } = await verify(folder, 'ferry.jpg');
    expect(code).toBe(1);
    const [first] = deliveriesOf(told) as { verdict: string; difference: Record<string, number> }[];
    expect(first.verdict).toBe('differs');
    expect(first.difference.largest).toBe(largest);
    expect(first.difference.mean).toBeCloseTo(sum / cut.length, 9);
    expect(first.difference.share01).toBeCloseTo(count / cut.length, 9);
    expect(count).toBeGreaterThan(100);
  });

  it('knows a photo that was renamed by its bytes, and writes nothing', async () => {
    const folder = await copyOfKept();
    await rename(join(folder, 'ferry.jpg'), join(folder, 'plate 7.jpg'));
    const before = (await readdir(folder)).sort();
    const { code, told } = await verify(folder, '.');
    expect(told.photos).toMatchObject([{ photo: 'plate 7.jpg', problem: null }]);
    expect(told.photos[0].remarks.join()).toMatch(/moved here from .*ferry\.jpg/);
    expect({ code, identical: told.identical }).toEqual({ code: 0, identical: 2 });
    expect((await readdir(folder)).filter((name) => name !== 'data').sort()).toEqual(before);
    // Painting with --keep, or going back, takes the recipe along for good.
    expect((await runIn(folder, ['return', 'plate 7.jpg', '--state', '2'])).code).toBe(0);
    expect(await readdir(folder)).toContain('plate 7.jpg.oxgall.json');
    expect(await readdir(folder)).not.toContain('ferry.jpg.oxgall.json');
  });

  it('names a photo that is nowhere, and goes on with the others', async () => {
    const folder = await copyOfKept();
    for (const name of ['ferry.jpg', 'ferry.jpg.oxgall.json'])
      await cp(join(folder, name), join(folder, name.replace('ferry', 'heron')));
    await rm(join(folder, 'ferry.jpg'));
    // A photo of these bytes is still there, and has a recipe of its own.
    const { code, told } = await verify(folder, '.');
    expect(code).toBe(1);
    expect(told).toMatchObject({ identical: 2, problems: 1 });
    expect(told.photos[0].problem).toMatch(/ferry\.jpg: there is no such file/);
  });

  it('finds recipes that are elsewhere because the folder cannot be written', async ({ skip }) => {
    const disk = await temporaryFolder();
    const reason = mountDisk(disk, 'size=4m');
    if (reason) skip(reason);
    await cp(join(kept, 'ferry.jpg'), join(disk, 'ferry.jpg'));
    makeReadOnly(disk);
    const home = await temporaryFolder();
    const photo = join(disk, 'ferry.jpg');
    const out = join(home, 'out.png');
    const chosen = join(home, 'recipes');
    const settings = await runIn(home, ['settings', '--recipes-elsewhere', chosen, '--json']);
    expect(JSON.parse(settings.out)).toMatchObject({ recipesElsewhere: chosen });
    const painted = await runIn(home, ['paint', photo, '--keep', '--out', out, '--json']);
    const { recipe, remarks } = JSON.parse(painted.out);
    expect(recipe.startsWith(chosen)).toBe(true);
    expect(remarks.join()).toContain('cannot be written');
    const { code, told } = await verify(home, disk);
    expect({ code, identical: told.identical, missing: told.missingFiles }).toEqual({
      code: 0,
      identical: 1,
      missing: 0,
    });
    // Back to the usual place: what lies in the other one is still found.
    await runIn(home, ['settings', '--recipes-elsewhere', 'usual']);
    expect((await verify(home, photo)).told.identical).toBe(1);
  });
});

describe('a recipe of a newer version', () => {
  it('is looked at, never painted over: --keep is refused before the painting', async () => {
    const folder = await copyOfKept();
    const path = join(folder, 'ferry.jpg.oxgall.json');
    const text = JSON.stringify({ ...JSON.parse(await readFile(path, 'utf8')), schema: 99 });
    await writeFile(path, text);
    const refused = await runIn(folder, ['paint', 'ferry.jpg', '--keep', '--out', 'three.png']);
    expect(refused.code).toBe(1);
    expect(refused.err).toMatch(/newer version.*Update Oxgall/);
    expect(await stat(join(folder, 'three.png')).catch(() => null)).toBeNull();
    const back = await runIn(folder, ['return', 'ferry.jpg', '--state', '1']);
    expect(back.code).toBe(1);
    expect(await readFile(path, 'utf8')).toBe(text);
    expect((await runIn(folder, ['paint', 'ferry.jpg', '--out', 'three.png'])).code).toBe(0);
  });
});
