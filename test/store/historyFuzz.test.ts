import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { mkdir, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { expect, it } from 'vitest';
import { canonicalJson } from '../../core/recipes/canonicalJson.ts';
import { FuzzedHistory, type Move, moves } from './fuzzedHistory.ts';
import { temporaryFolder } from './storeFolders.ts';

const seedFile = new URL('./historyFuzz.seeds.json', import.meta.url);
const kept: { seed: number; path: string }[] = JSON.parse(readFileSync(seedFile, 'utf8'));
const histories = 2000;

const move: fc.Arbitrary<Move> = fc.record({
  // What touches the disk comes less often: it takes a hundred times as long.
  name: fc.oneof(
    { weight: 9, arbitrary: fc.constantFrom(...moves.inMemory) },
    { weight: 1, arbitrary: fc.constantFrom(...moves.onDisk) },
  ),
  pick: fc.nat(1000),
  other: fc.nat(1000),
});

/** Memory, where there is such a disk: the test is about histories, and flushing is tested elsewhere. */
const disk = existsSync('/dev/shm') ? '/dev/shm' : tmpdir();

async function explore(parameters: { seed?: number; path?: string; numRuns: number }): Promise<void> {
  const root = await temporaryFolder(disk);
  let count = 0;
  const property = fc.asyncProperty(fc.array(move, { minLength: 1, maxLength: 18 }), async (made) => {
    const folder = join(root, String(count++));
    await mkdir(folder);
    await writeFile(join(folder, 'heron.jpg'), 'the heron stands in the shallows');
    const history = await FuzzedHistory.begin(folder);
    for (const each of made) {
      await history.make(each);
      history.check();
    }
    await history.checkDisk();
  });
  const result = await fc.check(property, parameters);
  if (!result.failed) return;
  const found = { seed: result.seed, path: result.counterexamplePath ?? '' };
  if (!kept.some((known) => canonicalJson(known) === canonicalJson(found)))
    writeFileSync(seedFile, `${JSON.stringify([...kept, found], null, 2)}\n`);
  throw new Error(fc.defaultReportMessage(result) ?? 'the histories failed', { cause: result.errorInstance });
}

it.each(kept)('holds what failed once: seed $seed, path $path', async ({ seed, path }) => {
  await explore({ seed, path, numRuns: 1 });
});

it(`loses no state in ${histories} random histories`, async () => {
  expect(moves.inMemory.length + moves.onDisk.length).toBeGreaterThan(12);
  await explore({ numRuns: histories });
}, 300_000);
