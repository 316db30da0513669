import { execFileSync } from 'node:child_process';
import { existsSync, readdirSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { p3Profile, srgbProfile } from '../../core/colour/matrixProfile.ts';
import { profileName } from '../../core/colour/profileName.ts';
import { temporaryFolder } from '../files/temporaryFolder.ts';

/*
 * The names of profiles, as exiftool reads them: ours of version 4, and the system's own, most of version 2.
 */
const exiftool = ['/usr/bin/exiftool', '/usr/local/bin/exiftool'].find((path) => existsSync(path));
const systemFolder = '/usr/share/color/icc';
const systemProfiles = existsSync(systemFolder)
  ? (readdirSync(systemFolder, { recursive: true }) as string[]).filter((name) => /\.ic[cm]$/i.test(name))
  : [];
const folder = temporaryFolder();

const nameTold = (path: string) =>
  String(
    JSON.parse(execFileSync(exiftool!, ['-json', '-ProfileDescription', path], { encoding: 'utf8' }))[0]
      .ProfileDescription,
  ).trim();

describe.skipIf(!exiftool)('the name of a profile, as exiftool reads it (skipped without it)', () => {
  it.each([
    ['srgb', srgbProfile()],
    ['p3', p3Profile()],
  ])('%s of our own', async (name, bytes) => {
    expect(profileName(bytes)).toBe(nameTold(await folder.file(`${name}.icc`, bytes)));
  });

  it.each(systemProfiles)('%s of the system', async (name) => {
    const path = join(systemFolder, name);
    expect(profileName(new Uint8Array(await readFile(path)))).toBe(nameTold(path));
  });
});

describe('the name of a profile', () => {
  it('is missing where the profile is cut off anywhere before its end, or at worst cut short', () => {
    const whole = srgbProfile();
    const name = profileName(whole)!;
    for (let length = 0; length < whole.length; length += 1) {
      const read = profileName(whole.subarray(0, length));
      expect(read === null || name.startsWith(read), `${length} bytes`).toBe(true);
    }
  });
});
