import { useEffect, useState } from 'react';
import type { FolderListing } from '../../main/host/api/hostCommands.ts';
import { host, troubleOf } from '../host/host.ts';
import { Dialog } from '../shell/Dialog.tsx';
import { dialogStore } from '../state/panelStore.ts';
import { openingStore, sessionStore } from '../state/photoStore.ts';
import { useStore } from '../state/store.ts';
import { seriesStore } from '../wall/wallStore.ts';
import { openSeries } from '../wall/wallWork.ts';
import { FolderList } from './FolderList.tsx';

const close = () => dialogStore.set('none');

/** Choosing a folder of photographs: the system's dialog where the shell has one, else our own list. */
export function OpenFolderDialog() {
  const hasSystemDialog = useStore(sessionStore, (session) => session?.desktop.fileDialogs ?? false);
  const [listing, setListing] = useState<FolderListing | null>(null);
  useEffect(() => {
    if (hasSystemDialog) void openWithSystemDialog();
  }, [hasSystemDialog]);
  if (hasSystemDialog) return null;
  const count = listing?.photos.length ?? 0;
  return (
    <Dialog title="Open a folder as a series" className="open-dialog" onClose={close}>
      <FolderList startPath={seriesStore.get()?.folder} choose="folder" onFolder={setListing} />
      <div className="dialog-foot">
        <button type="button" className="quiet-button" onClick={() => dialogStore.set('open')}>
          One photograph instead
        </button>
        <button
          type="button"
          className="ink-button"
          disabled={count === 0}
          onClick={() => {
            close();
            if (listing) void openSeries(listing.path);
          }}
        >
          {count === 0
            ? 'No photographs here'
            : `Hang ${count === 1 ? 'its photograph' : `its ${count} photographs`}`}
        </button>
      </div>
    </Dialog>
  );
}

async function openWithSystemDialog(): Promise<void> {
  try {
    const { path } = await host.call('chooseWithDialog', { kind: 'folder' });
    close();
    if (path) await openSeries(path);
  } catch (error) {
    close();
    openingStore.set({ path: null, trouble: troubleOf(error) });
  }
}
