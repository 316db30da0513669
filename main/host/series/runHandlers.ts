import { dirname } from 'node:path';
import type { RunCommands } from '../api/runCommands.ts';
import type { CommandHandlers } from '../commandHandlers.ts';
import type { HostState } from '../host.ts';
import { Refusal } from '../refusal.ts';
import type { SeriesRun } from './seriesRun.ts';

type RunHandlers = Pick<CommandHandlers, keyof RunCommands>;

/** The commands of runs; each is described where the contract lists it. */
export function createRunHandlers({ walls, grants }: HostState): RunHandlers {
  const withRun = async (seriesId: string, act: (run: SeriesRun) => unknown) => {
    const run = walls.runOf(seriesId);
    if (!run) throw new Refusal('NotFound', 'This series is not being painted.', 'Begin a run first.');
    await act(run);
    return run.view();
  };
  return {
    startRun: async ({ seriesId, outFolder }) => {
      // A folder of its own in one that may be written into is made when it is not there.
      if (dirname(outFolder) === walls.find(seriesId).folder) grants.allowWriting(outFolder);
      const folder = grants.checkWriting(outFolder);
      return (await walls.startRun(seriesId, folder)).view();
    },
    pauseRun: ({ seriesId }) => withRun(seriesId, (run) => run.pause()),
    resumeRun: ({ seriesId }) => withRun(seriesId, (run) => run.resume()),
    cancelRun: ({ seriesId }) => withRun(seriesId, (run) => run.cancel()),
    prioritise: ({ seriesId, frameIds }) => withRun(seriesId, (run) => run.prioritise(frameIds)),
    readRun: async ({ seriesId }) => ({ run: walls.runOf(seriesId)?.view() ?? null }),
  };
}
