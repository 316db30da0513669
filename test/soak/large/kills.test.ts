import { mkdir, mkdtemp, readdir, rm } from 'node:fs/promises';
import { join } from 'node:path';
import { setTimeout as wait } from 'node:timers/promises';
import sharp from 'sharp';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { spillFolder } from '../../../main/files/spillFile.ts';
import { photographs } from '../../fixtures/photographs.ts';
import { makeLargePhoto, startPainting } from './largePhoto.ts';

const kills = 16;

let folder = '';
let spills = '';
let plates = '';
beforeAll(async () => {
  folder = await mkdtemp(join(await spillFolder(), 'oxgall-kills-'));
  [spills, plates] = [join(folder, 'spills'), join(folder, 'plates')];
  await mkdir(spills);
  await mkdir(plates);
});
afterAll(() => rm(folder, { recursive: true, force: true }));

it('a large save killed at any moment leaves no partial output, and nothing at all after the next start', async () => {
  const photo = join(folder, 'photo.jpg');
  await makeLargePhoto(photo, 42);
  const out = join(plates, 'plate.png');
  const whole = startPainting(photo, out, spills);
  const { milliseconds } = await whole.painted();
  expect(await readdir(spills)).toEqual([]);
  await rm(out);
  let left = 0;
  for (let k = 0; k < kills; k++) {
    const share = (k + 0.5) / kills;
    const { child, ended } = startPainting(photo, out, spills);
    await Promise.race([wait(share * milliseconds.total * 1.05), ended]);
    child.kill('SIGKILL');
    await ended;
    const seen = (await readdir(plates)).filter((name) => !name.startsWith('.'));
    if (seen.length > 0) {
      // It had its name already: then it is whole, to the last row.
      expect(seen).toEqual(['plate.png']);
      await sharp(out, { limitInputPixels: false, failOn: 'warning' }).stats();
      await rm(out);
    }
    if ((await readdir(spills)).length > 0) left++;
    const next = join(plates, 'next.png');
    await startPainting(photographs.nagasakiBoats, next, spills).painted();
    expect(await readdir(spills), `killed at ${share}`).toEqual([]);
    expect(await readdir(plates), `killed at ${share}`).toEqual(['next.png']);
    await rm(next);
  }
  process.stdout.write(`${left} of ${kills} kills left temporary files for the next start\n`);
  expect(left).toBeGreaterThan(kills / 2);
}, 3_600_000);
