import { mkdtemp, readFile, rm } from 'node:fs/promises';
import { availableParallelism, tmpdir } from 'node:os';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { runLogName } from '../../main/series/runLog.ts';
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
        const { child, ended } = startProgram(data, words);
        const memory: MemorySample[] = [];
        const timer = setInterval(() => void sampleMemory(child.pid!, words, memory), 500);
        const { code, out } = await ended;
        clearInterval(timer);
        expect(code).toBe(0);
        return { ms: performance.now() - startMs, told: JSON.parse(out), memory };
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
        const early = meanOf(all.memory.filter(({ painted }) => painted >= 20 && painted < 60));
        const late = meanOf(all.memory.filter(({ painted }) => painted >= 160));
        process.stdout.write(
          `match ${match}: ${Math.round(early / 2 ** 20)} MB from frame 20 on, ${Math.round(late / 2 ** 20)} MB to frame 200\n`,
        );
        expect(late / early).toBeLessThan(1.1);
        if (match === '0') expect(all.ms / perfectMs).toBeLessThan(1.15);
      }
    } finally {
      await rm(folder, { recursive: true, force: true });
    }
  });
});

/** Resident memory when so many frames had been painted. */
interface MemorySample {
  painted: number;
  bytes: number;
}

/** Reads what the system says of a process; elsewhere than on Linux there is nothing to read. */
async function sampleMemory(pid: number, words: readonly string[], samples: MemorySample[]): Promise<void> {
  const out = words[words.indexOf('--out') + 1];
  const [status, log] = await Promise.all([
    readFile(`/proc/${pid}/status`, 'utf8').catch(() => ''),
    readFile(join(out, runLogName(null)), 'utf8').catch(() => ''),
  ]);
  const kilobytes = Number(/VmRSS:\s+(\d+)/.exec(status)?.[1]);
  const painted = log.split('"kind":"painted"').length - 1;
  if (kilobytes > 0) samples.push({ painted, bytes: kilobytes * 1024 });
}

function meanOf(samples: readonly MemorySample[]): number {
  return samples.reduce((sum, { bytes }) => sum + bytes, 0) / samples.length;
}
