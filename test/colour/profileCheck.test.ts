import { execFileSync } from 'node:child_process';
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import {
  p3Profile,
  rgbProfileOfGrey,
  srgbProfile,
  tagOf,
  wideProfile,
} from '../../core/colour/matrixProfile.ts';
import { isUsableProfile, lightnessOfHalf } from '../../core/colour/profileCheck.ts';
import { profileSpace } from '../../main/files/inputProfile.ts';

const own: [string, Uint8Array][] = [
  ['sRGB', srgbProfile()],
  ['Display P3', p3Profile()],
  ['wide', wideProfile()],
];

/** Profiles of the system, where there are any, as other programs made them. */
const folders = ['/usr/share/color/icc', '/usr/share/color/icc/ghostscript'].filter((folder) =>
  existsSync(folder),
);
const found: [string, Uint8Array][] = folders.flatMap((folder) =>
  readdirSync(folder)
    .filter((name) => /\.ic[cm]$/i.test(name))
    .map((name): [string, Uint8Array] => [
      `${folder}/${name}`,
      new Uint8Array(readFileSync(`${folder}/${name}`)),
    ])
    .filter(([, bytes]) => ['RGB ', 'GRAY', 'CMYK'].includes(profileSpace(bytes) ?? '')),
);
const hasTransicc = existsSync('/usr/bin/transicc');

/** L* of equal numbers, 0…255, by the independent engine. */
function lightnesses(profilePath: string, values: number[], channels: 1 | 3): number[] {
  const out = execFileSync('transicc', [`-i${profilePath}`, '-o*Lab', '-t1', '-n'], {
    input: values.map((value) => Array(channels).fill(value).join(' ')).join('\n'),
    encoding: 'utf8',
    stdio: ['pipe', 'pipe', 'ignore'],
  });
  const rows = out.trim().split('\n').slice(-values.length);
  return rows.map((row) => Number(row.trim().split(/\s+/)[0]));
}

describe('a profile', () => {
  it.each([...own, ...found])('is usable: %s', (_name, profile) => {
    expect(isUsableProfile(profile)).toBe(true);
  });

  it.each(own)(
    'gives half of the full number the lightness that the sRGB curve gives it: %s',
    (_, profile) => {
      // IEC 61966-2-1: 0.5 is a luminance of 0.21404, which is L* 53.389.
      expect(lightnessOfHalf(profile)).toBeCloseTo(53.389, 2);
    },
  );

  it.skipIf(!hasTransicc || found.length === 0)(
    'gives half of the full number the lightness that transicc finds (skipped without it)',
    () => {
      let compared = 0;
      for (const [path, profile] of found) {
        const half = lightnessOfHalf(profile);
        const space = profileSpace(profile);
        if (half === null || tagOf(profile, 'A2B0') || space === 'CMYK') continue;
        const [lightness] = lightnesses(path, [127.5], space === 'RGB ' ? 3 : 1);
        expect(Math.abs(half - lightness), path).toBeLessThan(0.3);
        compared++;
      }
      expect(compared).toBeGreaterThan(3);
    },
  );

  const greys = found.filter(([, profile]) => profileSpace(profile) === 'GRAY' && rgbProfileOfGrey(profile));

  it.skipIf(!hasTransicc || greys.length === 0)(
    'for grey has one for RGB whose greys transicc finds the same (skipped without it)',
    () => {
      const folder = mkdtempSync(join(tmpdir(), 'oxgall-grey-'));
      try {
        const steps = Array.from({ length: 18 }, (_, i) => i * 15);
        for (const [path, profile] of greys) {
          const asRgb = join(folder, 'rgb.icc');
          writeFileSync(asRgb, rgbProfileOfGrey(profile)!);
          const [grey, rgb] = [lightnesses(path, steps, 1), lightnesses(asRgb, steps, 3)];
          for (const [i, lightness] of grey.entries())
            expect(Math.abs(lightness - rgb[i]), `${path} ${steps[i]}`).toBeLessThan(0.2);
        }
      } finally {
        rmSync(folder, { recursive: true });
      }
    },
  );

  it.each(own)('is not usable without any one of its curves and columns: %s', (_, profile) => {
    for (const signature of ['rXYZ', 'gXYZ', 'bXYZ', 'rTRC', 'gTRC', 'bTRC']) {
      const damaged = profile.slice();
      const at = Buffer.from(damaged).indexOf(signature);
      damaged[at] = 0x3f;
      expect(isUsableProfile(damaged), signature).toBe(false);
    }
  });

  it('is judged without a fault whatever its bytes are', () => {
    const whole = p3Profile();
    for (let length = 0; length < whole.length; length++) {
      const cut = whole.subarray(0, length);
      isUsableProfile(cut);
      lightnessOfHalf(cut);
    }
    let seed = 3;
    for (let round = 0; round < 2000; round++) {
      const damaged = whole.slice();
      for (let i = 0; i < 4; i++) {
        seed = (Math.imul(seed, 1664525) + 1013904223) >>> 0;
        damaged[seed % damaged.length] = seed >>> 24;
      }
      isUsableProfile(damaged);
      lightnessOfHalf(damaged);
    }
  });
});
