import { dialogStore } from '../state/panelStore.ts';
import { useStore } from '../state/store.ts';
import { wallKeys } from '../wall/wallKeys.ts';
import { roomStore } from '../wall/wallStore.ts';
import { Dialog } from './Dialog.tsx';
import { keyCommands } from './keyCommands.ts';

/** Keys that belong to a place rather than to a command. */
const placeKeys: readonly { keys: string; does: string }[] = [
  { keys: 'Arrows, on the picture', does: 'Move the picture' },
  { keys: 'Arrows, on the cut’s handle', does: 'Move the cut; with Shift, farther' },
  { keys: 'Arrows, on a band’s edge', does: 'Change its strength' },
  { keys: 'Shift and Enter, on a band’s name', does: 'Lift the band off, or lay it down again' },
  { keys: 'Arrows, Home, End, on a state', does: 'Walk the thread; Tab goes into the state’s card' },
  { keys: 'Escape, on a state', does: 'Close its card' },
  { keys: 'Arrows, on the crop frame', does: 'Move it; with Shift, farther' },
  { keys: 'Delete, on a control', does: 'Back to the preset’s value' },
  { keys: 'Up and Down, in a value', does: 'One step; with Shift, ten' },
];

const wallPlaceKeys: readonly { keys: string; does: string }[] = [
  { keys: 'Arrows, Home, End', does: 'Walk among the frames' },
  { keys: 'Shift and arrows', does: 'Choose on the way' },
  { keys: 'Space', does: 'Choose the frame as well, or no longer' },
  { keys: 'Enter', does: 'Open the frame on the easel' },
];

export function KeysSheet() {
  const isAtWall = useStore(roomStore) === 'wall';
  return (
    <Dialog title="Keys" className="keys-sheet" onClose={() => dialogStore.set('none')}>
      <section
        className="keys-scroll"
        // biome-ignore lint/a11y/noNoninteractiveTabindex: a page that scrolls must be scrollable by keys
        tabIndex={0}
        aria-label="List of keys"
      >
        <table>
          <thead className="unseen">
            <tr>
              <th scope="col">Keys</th>
              <th scope="col">What they do</th>
            </tr>
          </thead>
          <tbody>
            {(isAtWall ? wallKeys : keyCommands).map(({ shown, does }) => (
              <tr key={does}>
                <th scope="row">{shown}</th>
                <td>{does}</td>
              </tr>
            ))}
            {(isAtWall ? wallPlaceKeys : placeKeys).map(({ keys, does }) => (
              <tr key={does}>
                <th scope="row">{keys}</th>
                <td>{does}</td>
              </tr>
            ))}
          </tbody>
        </table>
        <p className="keys-mouse">
          {isAtWall
            ? 'With the mouse: a click chooses a frame, with Ctrl another one as well, with Shift all between; a double click opens it on the easel.'
            : 'With the mouse: the wheel zooms at the pointer, a drag moves the picture; scroll over a band or pull its edge to change its strength; Shift and click its name to lift it; double click a control to go back to the preset’s value. Point at a state to see it, double click it to return to it, drag it onto the picture to compare; drop a recipe file on the picture to take its look.'}
        </p>
      </section>
    </Dialog>
  );
}
