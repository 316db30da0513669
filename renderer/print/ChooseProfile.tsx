import { host } from '../host/host.ts';
import { FolderList } from '../opening/FolderList.tsx';
import { Dialog } from '../shell/Dialog.tsx';
import { sessionStore } from '../state/photoStore.ts';

interface ChooseProfileProps {
  startPath: string | undefined;
  onChosen: (path: string) => void;
  onCancel: () => void;
}

/** Choosing an ICC file, where the shell has no dialog of its own. */
export function ChooseProfile({ startPath, onChosen, onCancel }: ChooseProfileProps) {
  return (
    <Dialog title="Choose a colour profile" className="open-dialog" onClose={onCancel}>
      <FolderList startPath={startPath} choose="profile" onProfile={onChosen} />
    </Dialog>
  );
}

/** Asks the system's dialog where there is one, else shows our own list. */
export async function chooseProfile(take: (path: string) => void, showList: () => void): Promise<void> {
  if (!sessionStore.get()?.desktop.fileDialogs) {
    showList();
    return;
  }
  const { path } = await host.call('chooseWithDialog', { kind: 'profile' });
  if (path) take(path);
}
