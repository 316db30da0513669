import { expect, it } from 'vitest';
import { killSaver } from '../store/killedSaver.ts';

it('a program killed while saving leaves the old recipe or the new one, 300 times over', async () => {
  const midway = await killSaver(300);
  process.stdout.write(`${midway} of 300 kills fell into a save\n`);
  expect(midway).toBeGreaterThan(10);
}, 1_800_000);
