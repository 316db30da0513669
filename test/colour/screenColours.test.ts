import { execFileSync } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { ciede2000 } from '../../core/colour/ciede2000.ts';
import { throughTable } from '../../core/colour/colourTable.ts';
import type { Triple } from '../../core/colour/lab.ts';
import { p3Profile, srgbProfile, wideProfile } from '../../core/colour/matrixProfile.ts';
import { ColourEngine } from '../../main/colour/colourEngine.ts';
import { screenTable } from '../../main/colour/screenTable.ts';

/*
 * What the colours on the canvas should be is asked of `transicc`, from the system's own LittleCMS tools.
 */
const hasTransicc = existsSync('/usr/bin/transicc');
const systemProfile = (name: string) => {
  const path = `/usr/share/color/icc/ghostscript/${name}.icc`;
  return existsSync(path) ? new Uint8Array(readFileSync(path)) : null;
};

let folder: string;
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'oxgall-screen-'));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

function transicc(input: string, output: string, rows: readonly (readonly number[])[]): number[][] {
  const out = execFileSync('transicc', [`-i${input}`, `-o${output}`, '-t1', '-b', '-n'], {
    input: rows.map((row) => row.join(' ')).join('\n'),
    encoding: 'utf8',
    stdio: ['pipe', 'pipe', 'ignore'],
  });
  const lines = out.trim().split('\n').slice(-rows.length);
  return lines.map((line) => line.trim().split(/\s+/).map(Number));
}

/** Greys, a cube of six steps a side with its strongest corners, and colours spread over the inside. */
function chart(): number[][] {
  const cube = [0, 51, 102, 153, 204, 255];
  const halton = (index: number, base: number): number => {
    let [value, part] = [0, 1 / base];
    for (let i = index; i > 0; i = Math.floor(i / base), part /= base) value += (i % base) * part;
    return value;
  };
  return [
    ...Array.from({ length: 52 }, (_, i) => [i * 5, i * 5, i * 5]),
    ...cube.flatMap((r) => cube.flatMap((g) => cube.map((b) => [r, g, b]))),
    ...Array.from({ length: 500 }, (_, i) => [2, 3, 5].map((base) => Math.round(halton(i + 1, base) * 255))),
  ];
}

/** transicc computes on beyond what a space holds, where pixels end. */
const cutOff = (value: number) => Math.min(255, Math.max(0, value));

const photos: [string, Uint8Array | null][] = [
  ['Display P3', p3Profile()],
  ['the wide space that pictures of other spaces are painted in', wideProfile()],
  ['an older wide space, of a plain power curve', systemProfile('a98')],
  ['a space wider than all colours', systemProfile('rommrgb')],
];

describe.skipIf(!hasTransicc)('colours on the canvas (skipped without transicc)', () => {
  for (const [screen, shown] of [
    ['srgb', srgbProfile()],
    ['p3', p3Profile()],
  ] as const)
    it.each(photos.filter(([, profile]) => profile))(
      `are those that LittleCMS gives, on a screen of ${screen}, for a photo in %s`,
      async (_, profile) => {
        const from = join(folder, 'from.icc');
        const to = join(folder, 'to.icc');
        await writeFile(from, profile!);
        await writeFile(to, shown);
        const colours = chart();
        const rgba = Uint8Array.from(colours.flatMap((colour) => [...colour, 255]));
        const table = screenTable(await ColourEngine.load(), profile!, screen);
        if (table) throughTable(rgba, table);
        const ours = transicc(
          to,
          '*Lab',
          colours.map((_, i) => [...rgba.subarray(i * 4, i * 4 + 3)]),
        );
        const asked = transicc(from, to, colours).map((colour) => colour.map(cutOff));
        const theirs = transicc(to, '*Lab', asked);
        const apart = ours.map((lab, i) =>
          ciede2000(lab as unknown as Triple, theirs[i] as unknown as Triple),
        );
        const worst = apart.indexOf(Math.max(...apart));
        expect(Math.max(...apart), `${colours[worst]}`).toBeLessThanOrEqual(1);
        expect(apart.reduce((sum, one) => sum + one) / apart.length).toBeLessThanOrEqual(0.3);
      },
    );

  it('are the photo’s own numbers for any writing of the screen’s own space', async () => {
    const engine = await ColourEngine.load();
    for (const profile of [srgbProfile(), systemProfile('srgb'), systemProfile('../sRGB')])
      if (profile) expect(screenTable(engine, profile, 'srgb')).toBeNull();
    expect(screenTable(engine, p3Profile(), 'p3')).toBeNull();
    expect(screenTable(engine, srgbProfile(), 'p3')).not.toBeNull();
  });
});
