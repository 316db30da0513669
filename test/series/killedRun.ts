import { mkdtemp, readdir, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import { expect } from 'vitest';
import { seededRandom } from '../kernels/testPictures.ts';
import { beginningsIn, hashesOf, startProgram, writeFrames } from './runProgram.ts';

/**
 * Kills a run again and again at random moments and goes on, then holds the end to an unbroken run: the same bytes, no
 * stray file, and no frame begun more often than a kill can account for.
 */
export async function holdToUnbroken(
  photograph: string,
  {
    frames,
    widthPx,
    kills,
    longestMs,
  }: { frames: number; widthPx: number; kills: number; longestMs: number },
): Promise<void> {
  const folder = await mkdtemp(join(tmpdir(), 'oxgall-killed-run-'));
  try {
    const names = await writeFrames(folder, photograph, frames, widthPx);
    const data = join(folder, 'data');
    const paint = (out: string, ...more: string[]) =>
      startProgram(data, ['series', folder, '--out', join(folder, out), ...more]);
    const whole = await paint('whole').ended;
    expect(whole.code).toBe(0);
    const random = seededRandom(7);
    let killed = 0;
    for (let i = 0; i < kills; i++) {
      const run = paint('broken', '--resume');
      const isOver = await Promise.race([
        run.ended.then(() => true),
        pause(random() * longestMs).then(() => false),
      ]);
      if (isOver) continue;
      run.child.kill('SIGKILL');
      await run.ended;
      killed++;
    }
    expect(killed).toBeGreaterThan(kills / 2);
    const last = await paint('broken', '--resume').ended;
    expect(last.code).toBe(0);
    expect(await hashesOf(join(folder, 'broken'))).toEqual(await hashesOf(join(folder, 'whole')));
    const left = await readdir(join(folder, 'broken'));
    expect(left.filter((name) => !name.endsWith('.png'))).toEqual(['run.oxgall.jsonl']);
    // Two frames are under way at a time, so a kill can cost two beginnings and no more.
    const begun = await beginningsIn(join(folder, 'broken'));
    const again = names.reduce((sum, name) => sum + (begun.get(name) ?? 0) - 1, 0);
    expect(again).toBeLessThanOrEqual(2 * killed);
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
}
