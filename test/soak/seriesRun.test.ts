import { mkdtemp, rm } from 'node:fs/promises';
import { availableParallelism, tmpdir } from 'node:os';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { photographs } from '../fixtures/photographs.ts';
import { holdToUnbroken } from '../series/killedRun.ts';
import { startProgram, writeFrames } from '../series/runProgram.ts';

describe('a long run', () => {
  it('ends as an unbroken one after fifty kills in sixty frames', { timeout: 3_600_000 }, async () => {
    await holdToUnbroken(photographs.nagasakiBoats, { frames: 60, widthPx: 700, kills: 50, longestMs: 3000 });
  });

  it('keeps the processors busy and its memory level over 200 frames', { timeout: 3_600_000 }, async () => {
    const folder = await mkdtemp(join(tmpdir(), 'oxgall-long-run-'));
    try {
      const names = await writeFrames(folder, photographs.nagasakiBoats, 200, 1600);
      const data = join(folder, 'data');
      const paint = async (...words: string[]) => {
        const startMs = performance.now();
        const { code, out } = await startProgram(data, words).ended;
        expect(code).toBe(0);
        return { ms: performance.now() - startMs, told: JSON.parse(out) };
      };
      const one = await paint(
        'paint',
        join(folder, names[0]),
        '--depth',
        '8',
        '--workers',
        '1',
        '--out',
        join(folder, 'one.png'),
        '--json',
      );
      for (const match of ['0', '1']) {
        const all = await paint(
          'series',
          folder,
          '--out',
          join(folder, `out ${match}`),
          '--match',
          match,
          '--json',
        );
        const perfectMs = (200 * one.told.milliseconds.total) / availableParallelism();
        process.stdout.write(`match ${match}: ${(all.ms / perfectMs).toFixed(2)} × the perfect time\n`);
        if (match === '0') expect(all.ms / perfectMs).toBeLessThan(1.15);
      }
    } finally {
      await rm(folder, { recursive: true, force: true });
    }
  });
});
