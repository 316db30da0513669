import { spawnSync } from 'node:child_process';
import { readdir, readFile, writeFile } from 'node:fs/promises';
import { expect, it } from 'vitest';
import { temporaryPath } from '../../main/files/unfinishedFile.ts';
import { placeNew, placeOver } from '../../main/host/placeFile.ts';
import { temporaryFolder } from '../files/temporaryFolder.ts';

const folder = temporaryFolder();

it('what a killed program left half placed goes with the next file; what is under way stays', async () => {
  // A process that has ended, and this one.
  const { pid } = spawnSync(process.execPath, ['-e', '0']);
  const place = folder.path('');
  const own = temporaryPath(place);
  await writeFile(own, 'under way');
  for (const put of [placeNew, placeOver]) {
    await writeFile(temporaryPath(place).replace(`-${process.pid}-`, `-${pid}-`), 'left behind');
    const path = await put(folder.path('plate.png'), (part) => writeFile(part, 'whole'));
    expect(await readFile(path, 'utf8')).toBe('whole');
    const names = await readdir(place);
    expect(names.filter((name) => name.endsWith('.part')).map((name) => own.endsWith(name))).toEqual([true]);
  }
});
