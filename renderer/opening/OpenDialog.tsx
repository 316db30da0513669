import { useEffect } from 'react';
import { openPhoto } from '../app/photoWork.ts';
import { host, troubleOf } from '../host/host.ts';
import { Dialog } from '../shell/Dialog.tsx';
import { dialogStore } from '../state/panelStore.ts';
import { openingStore, photoStore, sessionStore } from '../state/photoStore.ts';
import { useStore } from '../state/store.ts';
import { FolderList } from './FolderList.tsx';

/** Choosing a photo: the system's dialog where the shell has one, else our own list. */
export function OpenDialog() {
  const session = useStore(sessionStore);
  const opening = useStore(openingStore);
  const hasSystemDialog = session?.desktop.fileDialogs ?? false;
  useEffect(() => {
    if (hasSystemDialog) void openWithSystemDialog();
  }, [hasSystemDialog]);
  if (hasSystemDialog) return null;
  return (
    <Dialog title="Open a photograph" className="open-dialog" onClose={close}>
      {opening.trouble && (
        <p className="fault" role="alert">
          {opening.trouble.message} {opening.trouble.remedy}
        </p>
      )}
      <FolderList
        startPath={photoStore.get()?.folder ?? session?.recents.find((recent) => recent.present)?.folder}
        choose="photo"
        onPhoto={(path) => {
          close();
          void openPhoto(path);
        }}
      />
      <div className="dialog-foot">
        <button type="button" className="quiet-button" onClick={() => dialogStore.set('openFolder')}>
          A folder as a series instead
        </button>
      </div>
    </Dialog>
  );
}

function close(): void {
  dialogStore.set('none');
  if (openingStore.get().trouble) openingStore.set({ path: null, trouble: null });
}

async function openWithSystemDialog(): Promise<void> {
  try {
    const { path } = await host.call('chooseWithDialog', { kind: 'photo' });
    close();
    if (path) await openPhoto(path);
  } catch (error) {
    close();
    openingStore.set({ path: null, trouble: troubleOf(error) });
  }
}
