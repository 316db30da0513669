import { Easel } from '../easel/Easel.tsx';
import { FirstScreen } from '../opening/FirstScreen.tsx';
import { OpenDialog } from '../opening/OpenDialog.tsx';
import { OpenFolderDialog } from '../opening/OpenFolderDialog.tsx';
import { OpeningSign } from '../opening/OpeningSign.tsx';
import { useDrop } from '../opening/useDrop.ts';
import { SaveDialog } from '../saving/SaveDialog.tsx';
import { lookStore } from '../state/lookStore.ts';
import { paintStore } from '../state/paintStore.ts';
import { dialogStore } from '../state/panelStore.ts';
import { openingStore, photoStore } from '../state/photoStore.ts';
import { useStore } from '../state/store.ts';
import { ThreadRow } from '../states/ThreadRow.tsx';
import { ProofSheet } from '../wall/ProofSheet.tsx';
import { RunSheet } from '../wall/RunSheet.tsx';
import { RunStrip } from '../wall/RunStrip.tsx';
import { Wall } from '../wall/Wall.tsx';
import { WallTop } from '../wall/WallTop.tsx';
import { roomStore, seriesStore, settingsStore, wallSheetStore } from '../wall/wallStore.ts';
import { KeysSheet } from './KeysSheet.tsx';
import { Notices } from './Notices.tsx';
import { TopBar } from './TopBar.tsx';

export function App() {
  const photo = useStore(photoStore);
  const look = useStore(lookStore, (history) => history?.present ?? null);
  const dialog = useStore(dialogStore);
  const opening = useStore(openingStore);
  const isDropping = useDrop();
  const paint = useStore(paintStore);
  const series = useStore(seriesStore);
  const settings = useStore(settingsStore, (history) => history?.present ?? null);
  const room = useStore(roomStore);
  const sheet = useStore(wallSheetStore);
  const isAtWork = photo !== null && look !== null;
  const isAtWall = room === 'wall' && series !== null && settings !== null;
  return (
    <div
      className={isDropping ? 'window window-dropping' : 'window'}
      data-painting={paint.busy}
      data-rough={paint.isRough}
    >
      {isAtWall ? (
        <>
          <WallTop series={series} />
          <Wall series={series} settings={settings} />
          <RunStrip />
        </>
      ) : isAtWork ? (
        <>
          <TopBar photo={photo} />
          <ThreadRow photo={photo} look={look} />
          <Easel photo={photo} look={look} />
        </>
      ) : (
        <FirstScreen />
      )}
      {(isAtWork || isAtWall) && (opening.path !== null || opening.trouble !== null) && (
        <OpeningSign opening={opening} />
      )}
      {dialog === 'keys' && <KeysSheet />}
      {dialog === 'open' && <OpenDialog />}
      {dialog === 'openFolder' && <OpenFolderDialog />}
      {sheet === 'run' && isAtWall && <RunSheet series={series} settings={settings} />}
      {sheet === 'proof' && isAtWall && <ProofSheet series={series} />}
      {dialog === 'save' && isAtWork && <SaveDialog photo={photo} look={look} />}
      <Notices />
    </div>
  );
}
