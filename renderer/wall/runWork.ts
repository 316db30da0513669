import type { RunView } from '../../main/host/api/runCommands.ts';
import { host, troubleOf } from '../host/host.ts';
import { addNotice } from '../state/noticeStore.ts';
import { createStore } from '../state/store.ts';
import { seriesStore, wallSheetStore } from './wallStore.ts';

/** The run of the series on the Wall; null while there is none. */
export const runStore = createStore<RunView | null>(null);

/** The host tells how far a run is. */
export function takeRun(seriesId: string, run: RunView): void {
  if (seriesStore.get()?.seriesId !== seriesId) return;
  const before = runStore.get();
  runStore.set(run);
  if (before?.state === run.state || run.state === 'running' || run.state === 'paused') return;
  addNotice(endInWords(run));
}

export function endInWords({ state, done, failed, total, message }: RunView): string {
  if (state === 'failed') return `The run stopped: ${message}`;
  if (state === 'cancelled') return `The run was stopped after ${done} of ${total} frames.`;
  if (failed > 0) return `${done} of ${total} frames are painted; ${failed} could not be.`;
  return total === 1 ? 'The frame is painted.' : `All ${total} frames are painted.`;
}

export async function startRun(outFolder: string): Promise<void> {
  const seriesId = seriesStore.get()?.seriesId;
  if (!seriesId) return;
  try {
    runStore.set(await host.call('startRun', { seriesId, outFolder }));
    wallSheetStore.set('none');
  } catch (error) {
    const { message, remedy } = troubleOf(error);
    addNotice(`${message} ${remedy}`.trim());
  }
}

type RunStep = 'pauseRun' | 'resumeRun' | 'cancelRun';

export async function stepRun(step: RunStep): Promise<void> {
  await ask((seriesId) => host.call(step, { seriesId }));
}

/** Paints these frames next. */
export async function paintFirst(frameIds: string[]): Promise<void> {
  await ask((seriesId) => host.call('prioritise', { seriesId, frameIds }));
}

async function ask(call: (seriesId: string) => Promise<RunView>): Promise<void> {
  const seriesId = seriesStore.get()?.seriesId;
  if (!seriesId) return;
  try {
    runStore.set(await call(seriesId));
  } catch (error) {
    addNotice(troubleOf(error).message);
  }
}

/** A run may have gone on, or ended, while another series was looked at. */
export async function readRun(): Promise<void> {
  const seriesId = seriesStore.get()?.seriesId;
  runStore.set(null);
  if (!seriesId) return;
  const { run } = await host.call('readRun', { seriesId }).catch(() => ({ run: null }));
  if (seriesStore.get()?.seriesId === seriesId) runStore.set(run);
}
