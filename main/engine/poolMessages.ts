import type { Job } from '../../core/pipeline/jobs.ts';

/** What a worker is started with. */
export interface WorkerStart {
  module: WebAssembly.Module;
  memory: WebAssembly.Memory;
  /** Lets other work of the machine go first, where the system has priorities of threads. */
  givesWay: boolean;
}

/** One job for every worker: they share the counter at `counter` and each takes the next tile until none is left. */
export interface JobMessage {
  job: Job;
  /** Byte offset of the shared i32 counter of tiles taken. */
  counter: number;
  tiles: number;
  /** This worker's own scratch. */
  scratch: number;
}

export interface JobReport {
  grainMs: number;
  totalMs: number;
  /** The message of what went wrong, where something did. */
  error?: string;
}
