import type { OfSeries } from './seriesCommands.ts';

/** Painting a series to files. A run goes on while the window does something else; `runProgress` tells how far it is. */
export interface RunCommands {
  /** Begins, or takes up the run whose log lies in that folder. */
  startRun: { input: OfSeries & { outFolder: string }; output: RunView };
  pauseRun: { input: OfSeries; output: RunView };
  resumeRun: { input: OfSeries; output: RunView };
  /** Stops; what is painted stays, and the run can be taken up again. */
  cancelRun: { input: OfSeries; output: RunView };
  /** Paints these frames next. */
  prioritise: { input: OfSeries & { frameIds: string[] }; output: RunView };
  /** The run of a series, also one that has ended; null where there was none since it was opened. */
  readRun: { input: OfSeries; output: { run: RunView | null } };
}

export interface RunView {
  outFolder: string;
  state: 'running' | 'paused' | 'done' | 'cancelled' | 'failed';
  /** What stopped a run that failed, such as a full disk. */
  message: string;
  total: number;
  done: number;
  failed: number;
  fraction01: number;
  /** Null until it can be told. */
  leftMs: number | null;
  /** By frame; a frame that is missing is not part of the run. */
  frames: Record<string, RunFrame>;
}

export interface RunFrame {
  state: 'waiting' | 'painting' | 'painted' | 'kept' | 'failed';
  /** While it is painted. */
  fraction01: number;
  /** Why it failed, or why it was not painted anew. */
  message: string;
  /** The file, once it is there. */
  path: string | null;
}
