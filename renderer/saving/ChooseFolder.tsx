import { useState } from 'react';
import type { FolderListing } from '../../main/host/api/hostCommands.ts';
import { host } from '../host/host.ts';
import { FolderList } from '../opening/FolderList.tsx';
import { Dialog } from '../shell/Dialog.tsx';
import { sessionStore } from '../state/photoStore.ts';

interface ChooseFolderProps {
  startPath: string;
  onChosen: (path: string) => void;
  onCancel: () => void;
}

/** Choosing a folder to write into, where the shell has no dialog of its own. */
export function ChooseFolder({ startPath, onChosen, onCancel }: ChooseFolderProps) {
  const [listing, setListing] = useState<FolderListing | null>(null);
  return (
    <Dialog title="Choose a folder" className="open-dialog" onClose={onCancel}>
      <FolderList startPath={startPath} choose="folder" onFolder={setListing} />
      {listing && !listing.writable && (
        <p className="fault" role="alert">
          Nothing can be saved in {listing.name}. Choose another folder.
        </p>
      )}
      <div className="dialog-foot">
        <button type="button" className="quiet-button" onClick={onCancel}>
          Cancel
        </button>
        <button
          type="button"
          className="ink-button"
          disabled={!listing?.writable}
          onClick={() => listing && onChosen(listing.path)}
        >
          Save in {listing?.name ?? 'this folder'}
        </button>
      </div>
    </Dialog>
  );
}

/** Asks the system's dialog where there is one, else shows our own list. */
export async function chooseFolder(
  folder: string,
  take: (path: string) => void,
  showList: () => void,
): Promise<void> {
  if (!sessionStore.get()?.desktop.fileDialogs) {
    showList();
    return;
  }
  const { path } = await host.call('chooseWithDialog', { kind: 'folder', folder });
  if (path) take(path);
}
