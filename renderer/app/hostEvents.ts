import type { HostEvent, MenuCommand } from '../../main/host/api/hostEvents.ts';
import { zoomByKey } from '../easel/Stage.tsx';
import { fitPicture, showFullSize } from '../easel/viewMoves.ts';
import { host } from '../host/host.ts';
import { takeProgress } from '../saving/saveWork.ts';
import { redoLook, undoLook } from '../state/lookStore.ts';
import { dialogStore } from '../state/panelStore.ts';
import { photoStore, sessionStore } from '../state/photoStore.ts';
import { takeProofProgress } from '../wall/proofProgress.ts';
import { takeRun } from '../wall/runWork.ts';
import { openSeries, refreshSeries } from '../wall/wallWork.ts';
import { refreshMemory } from './memoryWork.ts';
import { closePhoto, openPhoto } from './photoWork.ts';

/** What the window does about the host's events. */
export function takeHostEvent(event: HostEvent): void {
  switch (event.name) {
    case 'progress':
      takeProgress(event.data);
      takeProofProgress(event.data);
      return;
    case 'photoClosed':
      // Closed to make room while it stands on the easel: it is opened again, its recipe brings the look back.
      if (event.data.reason === 'madeRoom' && event.data.photoId === photoStore.get()?.photoId)
        void openPhoto(photoStore.get()!.path);
      return;
    case 'openRequested':
      if (event.data.kind === 'photo') void openPhoto(event.data.path);
      else void openSeries(event.data.path);
      return;
    case 'menu':
      runMenuCommand(event.data.command);
      return;
    case 'recentsChanged':
      void host
        .call('listRecents', {})
        .then(({ recents }) => sessionStore.update((session) => session && { ...session, recents }))
        .catch(() => undefined);
      return;
    case 'memoryChanged':
      void refreshMemory(event.data.photoId);
      return;
    case 'seriesChanged':
      void refreshSeries(event.data.seriesId);
      return;
    case 'runProgress':
      takeRun(event.data.seriesId, event.data.run);
      return;
    case 'photoReady':
      // `awaitPhoto` answers the same.
      return;
  }
}

function runMenuCommand(command: MenuCommand): void {
  const atWork = photoStore.get() !== null;
  if (command === 'openPhoto') dialogStore.set('open');
  else if (command === 'openFolder') dialogStore.set('openFolder');
  else if (command === 'showKeys') dialogStore.set('keys');
  else if (atWork) easelCommands[command]();
}

const easelCommands: Record<Exclude<MenuCommand, 'openPhoto' | 'openFolder' | 'showKeys'>, () => void> = {
  save: () => dialogStore.set('save'),
  undo: undoLook,
  redo: redoLook,
  zoomIn: () => zoomByKey(1),
  zoomOut: () => zoomByKey(-1),
  zoomFit: fitPicture,
  zoomFull: showFullSize,
  closePhoto: () => void closePhoto(),
};
