import type * as fs from 'node:fs';
import * as promises from 'node:fs/promises';
import { describe, expect, it, vi } from 'vitest';
import { changeParameters, keepState } from '../../core/recipes/recipeHistory.ts';
import { moment } from '../recipes/sampleRecipes.ts';
import { storeWithPhoto } from './storeFolders.ts';

/** The step of a write that fails next, counted from its first system call; 0 for none. */
const fault = vi.hoisted(() => ({ at: 0, calls: 0, path: '' }));

vi.mock('node:fs', async (original) => {
  const real = await original<typeof fs>();
  return {
    ...real,
    openSync: (...args: Parameters<typeof real.openSync>) => {
      failHere();
      return real.openSync(...args);
    },
    write: faulty(real.write as never),
    fsync: faulty(real.fsync as never),
  };
});
vi.mock('node:fs/promises', async (original) => {
  const real = await original<typeof promises>();
  const rejecting =
    <Call extends (...args: never[]) => Promise<unknown>>(call: Call) =>
    async (...args: Parameters<Call>) => {
      failHere();
      return call(...args);
    };
  return { ...real, rename: rejecting(real.rename as never), open: rejecting(real.open as never) };
});

function failHere(): void {
  fault.calls++;
  if (fault.at === fault.calls) throw Object.assign(new Error('the disk failed'), { code: 'EIO' });
}

/** A call with a callback that fails at its turn; promisify takes it for what it stands for. */
function faulty(call: (...args: unknown[]) => void) {
  const wrapped = (...args: unknown[]) => {
    try {
      failHere();
    } catch (failure) {
      return (args.at(-1) as (failure: unknown) => void)(failure);
    }
    return call(...args);
  };
  const promised = Reflect.get(call, Symbol.for('nodejs.util.promisify.custom')) as unknown;
  const custom = (...args: unknown[]) =>
    new Promise((resolve, reject) => {
      wrapped(...args, (failure: unknown, bytesWritten: number) =>
        failure ? reject(failure) : resolve(promised ? { bytesWritten } : bytesWritten),
      );
    });
  return Object.assign(wrapped, { [Symbol.for('nodejs.util.promisify.custom')]: custom });
}

/** Saves a second state over a first one, with the fault at that step. */
async function saveWithFaultAt(at: number) {
  const made = await storeWithPhoto();
  const { store, photoPath, recipe } = made;
  const { version } = (await store.save(photoPath, recipe, { version: null })) as { version: string };
  const ours = keepState(changeParameters(recipe, { 'body.brush': '5mm' }), '', moment(1));
  Object.assign(fault, { at, calls: 0 });
  const saved = await store.save(photoPath, ours, { version });
  const steps = fault.calls;
  Object.assign(fault, { at: 0 });
  return { ...made, saved, steps };
}

describe('a save that fails at any step', () => {
  it('leaves nothing lost and no litter, and the next save works', async () => {
    const { steps } = await saveWithFaultAt(0);
    expect(steps).toBeGreaterThan(6);
    let failures = 0;
    for (let at = 1; at <= steps; at++) {
      const { store, photos, photoPath, photo, saved } = await saveWithFaultAt(at);
      if (saved.kind === 'failed') {
        failures++;
        expect(saved.message, `step ${at}`).toMatch(/heron\.jpg\.oxgall\.json.*safe in/);
      } else expect(saved.kind, `step ${at}`).toBe('saved');
      expect((await promises.readdir(photos)).sort(), `step ${at}`).toEqual([
        'heron.jpg',
        'heron.jpg.oxgall.json',
      ]);
      const loaded = await store.load(photoPath, photo);
      if (loaded.kind !== 'open') throw new Error(`step ${at}: ${JSON.stringify(loaded)}`);
      expect(loaded.recipe.histories[0].states.length, `step ${at}`).toBe(2);
      expect((await store.save(photoPath, loaded.recipe, loaded)).kind).toBe('saved');
    }
    expect(failures).toBeGreaterThan(2);
  });
});
