// A worker thread of the engine: instantiates the kernels over the shared memory and takes tiles until none is left.
import { constants, setPriority } from 'node:os';
import { parentPort, workerData } from 'node:worker_threads';
import { instantiateKernels } from '../../core/kernels/module.ts';
import { runTile } from '../../core/pipeline/runTile.ts';
import type { JobMessage, JobReport, WorkerStart } from './poolMessages.ts';

const { module, memory, givesWay } = workerData as WorkerStart;
// Linux has priorities of single threads, and 0 means the one that asks; elsewhere it would be the whole program.
if (givesWay && process.platform === 'linux') setPriority(0, constants.priority.PRIORITY_BELOW_NORMAL);
const kernels = await instantiateKernels(module, memory);
const now = () => performance.now();

parentPort!.on('message', ({ job, counter, tiles, scratch }: JobMessage) => {
  const startMs = now();
  const times = { grainMs: 0 };
  const report: JobReport = { grainMs: 0, totalMs: 0 };
  try {
    // The memory may have grown since the last job: take its buffer again.
    const taken = new Int32Array(memory.buffer, counter, 1);
    for (let tile = Atomics.add(taken, 0, 1); tile < tiles; tile = Atomics.add(taken, 0, 1)) {
      runTile(kernels, job, tile, scratch, now, times);
    }
  } catch (error) {
    report.error = error instanceof Error ? error.message : String(error);
  }
  parentPort!.postMessage({ ...report, grainMs: times.grainMs, totalMs: now() - startMs });
});

parentPort!.postMessage('ready');
