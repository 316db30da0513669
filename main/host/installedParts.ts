import { availableParallelism } from 'node:os';
import type { Engine } from '../engine/engineApi.ts';
import { dataFolder } from '../store/dataFolder.ts';
import type { Stores } from '../store/openStores.ts';
import { findDemo } from './demoSeries.ts';
import type { ComposeSmall, Desktop, HostFiles, HostParts } from './hostParts.ts';

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
    return createEngine({ workers, givesWay: true });
  });
  return {
    ...options,
    workers,
    dataFolder: dataFolder(),
    demo: findDemo(dataFolder()),
    loadEngine,
    loadFiles: once<HostFiles>(async () => {
      const [
        { readAnyPhoto, holdPhoto },
        { writePicture },
        quick,
        { removeAbandonedSpills },
        { readScreenTable },
        { readGamutTable },
        { readForPrint },
        { paintPrepared },
        { deliverPainting },
        { describeProfile },
      ] = await Promise.all([
        import('../painting/holdPhoto.ts'),
        import('../files/writePicture.ts'),
        import('./quickPicture.ts'),
        import('../files/spillFile.ts'),
        import('./readScreenTable.ts'),
        import('./readGamutTable.ts'),
        import('../painting/readForPrint.ts'),
        import('../painting/paintPrepared.ts'),
        import('../painting/deliverPainting.ts'),
        import('./describeProfile.ts'),
      ]);
      await removeAbandonedSpills();
      const { readFacts, readQuick } = quick;
      return {
        readPhoto: readAnyPhoto,
        holdPhoto,
        readForPrint,
        paintPrepared,
        deliverPainting,
        writePicture,
        readFacts,
        readQuick,
        readScreenTable,
        describeProfile,
        readGamutTable,
      };
    }),
    loadStores: once<Stores>(async () => {
      const { openStores } = await import('../store/openStores.ts');
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
