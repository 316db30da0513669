import type { SeriesCommands } from '../api/seriesCommands.ts';
import type { CommandHandlers } from '../commandHandlers.ts';
import type { HostState } from '../host.ts';
import { makeSeriesProof } from './seriesProof.ts';

type SeriesHandlers = Pick<CommandHandlers, keyof SeriesCommands>;

/** The commands of the series; each is described where the contract lists it. */
export function createSeriesHandlers(state: HostState): SeriesHandlers {
  const { walls, grants, recents, events, memories } = state;
  return {
    openSeries: async ({ path }) => {
      const folder = grants.checkListing(path);
      const series = await walls.open(folder);
      // The user chose the folder: its photos may be opened, and paintings may lie in it.
      grants.folderWasListed(folder);
      memories.folderOpened(series.frameIds.map((frameId) => series.pathOf(frameId)));
      const added = recents.add({ path: folder, frames: series.frameIds.length });
      void added.then(() => events.send('recentsChanged', {}));
      return series.view();
    },
    readSeries: async ({ seriesId }) => walls.find(seriesId).view(),
    closeSeries: async ({ seriesId }) => {
      await walls.close(seriesId);
      return {};
    },
    changeSeries: async ({ seriesId, change }) => {
      const series = walls.find(seriesId);
      series.change(change);
      return series.view();
    },
    paintFramePicture: ({ seriesId, frameId, longEdgePx, rough }, call) =>
      walls.pictures.paint(walls.find(seriesId).pictureOrder(frameId), { longEdgePx, rough }, call.signal),
    makeProof: (input, call) => makeSeriesProof(walls.find(input.seriesId), input, call, state),
  };
}
