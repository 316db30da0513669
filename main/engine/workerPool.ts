import { Worker } from 'node:worker_threads';
import { type Job, tileCount } from '../../core/pipeline/jobs.ts';
import type { JobMessage, JobReport, WorkerStart } from './poolMessages.ts';
import type { SharedHeap } from './sharedHeap.ts';

/** Added to the counter of taken tiles to stop a job: no picture has that many. */
const stopCount = 1 << 30;
/** How often a running job tells how far it is. */
const progressIntervalMs = 40;

export interface RunOptions {
  signal?: AbortSignal;
  /** Bytes of scratch each worker needs. */
  scratchBytes: number;
  onProgress?: (fraction01: number) => void;
}

/**
 * Worker threads over one shared memory. Jobs run one after the other, each on all workers; a tile is taken by
 * whichever worker is free. Aborting stops every worker at its next tile.
 */
export class WorkerPool {
  readonly #workers: Worker[];
  readonly #heap: SharedHeap;
  readonly #counter: number;
  #scratch: { pointer: number; bytes: number }[];
  #last: Promise<unknown> = Promise.resolve();
  #failure: Error | null = null;

  private constructor(workers: Worker[], heap: SharedHeap) {
    this.#workers = workers;
    this.#heap = heap;
    this.#counter = heap.allocate(64);
    this.#scratch = workers.map(() => ({ pointer: 0, bytes: 0 }));
    for (const worker of workers) {
      worker.on('error', (error) => {
        this.#failure = error instanceof Error ? error : new Error(String(error));
      });
    }
  }

  /**
   * @param workerFile the bundled worker's address
   * @param givesWay to everything else on the machine
   */
  static async start(
    count: number,
    workerFile: URL,
    module: WebAssembly.Module,
    heap: SharedHeap,
    givesWay = false,
  ): Promise<WorkerPool> {
    const workerData: WorkerStart = { module, memory: heap.memory, givesWay };
    const workers = Array.from({ length: count }, () => new Worker(workerFile, { workerData }));
    await Promise.all(
      workers.map(
        (worker) =>
          new Promise<void>((resolve, reject) => {
            worker.once('message', () => resolve());
            worker.once('error', reject);
          }),
      ),
    );
    return new WorkerPool(workers, heap);
  }

  get size(): number {
    return this.#workers.length;
  }

  /**
   * Runs a job when those before it are done.
   * @returns milliseconds of grain and of the whole job, summed over the workers
   * @throws the signal's reason where it was aborted; Error where a worker failed
   */
  run(job: Job, options: RunOptions): Promise<{ grainMs: number; totalMs: number }> {
    const turn = this.#last.then(() => this.#runNow(job, options));
    this.#last = turn.catch(() => undefined);
    return turn;
  }

  async #runNow(job: Job, { signal, scratchBytes, onProgress }: RunOptions) {
    signal?.throwIfAborted();
    if (this.#failure) throw this.#failure;
    this.#reserveScratch(scratchBytes);
    const tiles = tileCount(job.grid);
    const taken = new Int32Array(this.#heap.memory.buffer, this.#counter, 1);
    Atomics.store(taken, 0, 0);
    const stop = () => Atomics.add(taken, 0, stopCount);
    signal?.addEventListener('abort', stop, { once: true });
    const timer = onProgress
      ? setInterval(() => onProgress(Math.min(1, Atomics.load(taken, 0) / tiles)), progressIntervalMs)
      : undefined;
    try {
      const reports = await Promise.all(
        this.#workers.map((worker, i) =>
          send(worker, { job, counter: this.#counter, tiles, scratch: this.#scratch[i].pointer }),
        ),
      );
      signal?.throwIfAborted();
      const failed = reports.find((report) => report.error !== undefined);
      if (failed) throw new Error(`Painting failed: ${failed.error}`);
      return {
        grainMs: reports.reduce((sum, report) => sum + report.grainMs, 0),
        totalMs: reports.reduce((sum, report) => sum + report.totalMs, 0),
      };
    } finally {
      clearInterval(timer);
      signal?.removeEventListener('abort', stop);
    }
  }

  #reserveScratch(bytes: number): void {
    for (const own of this.#scratch) {
      if (own.bytes >= bytes) continue;
      this.#heap.free(own.pointer);
      own.pointer = this.#heap.allocate(bytes);
      own.bytes = bytes;
    }
  }

  async close(): Promise<void> {
    await this.#last;
    await Promise.all(this.#workers.map((worker) => worker.terminate()));
  }
}

function send(worker: Worker, message: JobMessage): Promise<JobReport> {
  return new Promise((resolve, reject) => {
    const done = (report: JobReport) => {
      worker.off('error', reject);
      resolve(report);
    };
    worker.once('message', done);
    worker.once('error', reject);
    worker.postMessage(message);
  });
}
