import { availableParallelism } from 'node:os';
import type { Engine } from '../engine/engineApi.ts';
import { dataFolder } from './dataFolder.ts';
import { findDemo } from './demoSeries.ts';
import type { ComposeSmall, Desktop, HostFiles, HostParts } from './hostParts.ts';
import type { Stores } from './photoMemories.ts';

/**
 * The parts of the program as it is installed. Engine, image library and kernels are imported when they are
 * first needed: the window is on the screen before they are loaded.
 */
export function installedParts(options: {
  shell: HostParts['shell'];
  appVersion: string;
  desktop: Desktop;
}): HostParts & { closeEngine(): Promise<void> } {
  const workers = Math.max(1, Number(process.env.OXGALL_WORKERS) || availableParallelism());
  const loadEngine = once<Engine>(async () => {
    const { createEngine } = await import('../engine/paintEngine.ts');
    return createEngine({ workers });
  });
  return {
    ...options,
    workers,
    dataFolder: dataFolder(),
    demo: findDemo(dataFolder()),
    loadEngine,
    loadFiles: once<HostFiles>(async () => {
      const [{ readPhoto }, { writePicture }, quick] = await Promise.all([
        import('../files/readPhoto.ts'),
        import('../files/writePicture.ts'),
        import('./quickPicture.ts'),
      ]);
      return { readPhoto, writePicture, readFacts: quick.readFacts, readQuick: quick.readQuick };
    }),
    loadStores: once<Stores>(async () => {
      const { openStores } = await import('./openStores.ts');
      return openStores(dataFolder());
    }),
    loadComposeSmall: once<ComposeSmall>(async () => (await import('./composeSmall.ts')).loadComposeSmall()),
    closeEngine: async () => {
      if (loadEngine.asked) await (await loadEngine()).close();
    },
  };
}

/** Runs `load` when first asked and remembers it; a failure is forgotten, so that asking again tries again. */
function once<T>(load: () => Promise<T>): (() => Promise<T>) & { asked: boolean } {
  let loaded: Promise<T> | null = null;
  const ask = () => {
    ask.asked = true;
    loaded ??= load().catch((error) => {
      loaded = null;
      ask.asked = false;
      throw error;
    });
    return loaded;
  };
  ask.asked = false;
  return ask;
}
