import { expect, it } from 'vitest';
import { killSaver } from './killedSaver.ts';

it('a program killed while saving leaves the old recipe or the new one, 40 times over', async () => {
  const midway = await killSaver(40);
  // Kills that always fell between two saves would prove nothing.
  expect(midway).toBeGreaterThan(0);
}, 180_000);
