import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { closePhoto } from '../app/photoWork.ts';
import { lookStore, redoLook, undoLook } from '../state/lookStore.ts';
import { dialogStore } from '../state/panelStore.ts';
import { useStore } from '../state/store.ts';
import { changeView, viewStore } from '../state/viewStore.ts';
import { RoomToggle } from '../wall/RoomToggle.tsx';
import { toggleSplit } from './keyCommands.ts';

/** The photo's name, and what can be done with the whole of it. */
export function TopBar({ photo }: { photo: OpenedPhoto }) {
  const history = useStore(lookStore);
  const isSplit = useStore(viewStore, (view) => view.split01 !== null);
  const undoStep = history?.past.at(-1);
  const redoStep = history?.future[0];
  const name = photo.name.replace(/\.[^.]+$/, '');
  return (
    <header className="top">
      <h1 className="top-name" title={photo.path}>
        {name}
      </h1>
      <span className="top-facts">
        {photo.widthPx.toLocaleString('en')} × {photo.heightPx.toLocaleString('en')} px
        {photo.depth === 16 ? ', 16 bits' : ''}
      </span>
      <RoomToggle />
      <nav className="top-work" aria-label="Work">
        <button
          type="button"
          className="plain-button"
          disabled={!undoStep}
          title={undoStep ? `Undo: ${undoStep.label} (Ctrl Z)` : 'Nothing to undo'}
          onClick={undoLook}
        >
          Undo
        </button>
        <button
          type="button"
          className="plain-button"
          disabled={!redoStep}
          title={redoStep ? `Redo: ${redoStep.label} (Ctrl Shift Z)` : 'Nothing to redo'}
          onClick={redoLook}
        >
          Redo
        </button>
        <span className="top-rule" aria-hidden="true" />
        <button
          type="button"
          className="plain-button"
          aria-pressed={isSplit}
          title="Photograph and painting side by side (C)"
          onClick={toggleSplit}
        >
          Compare
        </button>
        <LiftButton />
      </nav>
      <div className="top-end">
        <button
          type="button"
          className="plain-button"
          title="All the keys (?)"
          onClick={() => dialogStore.set('keys')}
        >
          Keys
        </button>
        <button
          type="button"
          className="plain-button"
          title="Back to the first screen; your changes are kept (Ctrl Shift W)"
          onClick={() => void closePhoto()}
        >
          Put away
        </button>
        <button
          type="button"
          className="plain-button"
          title="Open another photograph (Ctrl O)"
          onClick={() => dialogStore.set('open')}
        >
          Open…
        </button>
        <button
          type="button"
          className="ink-button"
          title="Save the painting as a file (Ctrl S)"
          onClick={() => dialogStore.set('save')}
        >
          Save…
        </button>
      </div>
    </header>
  );
}

/** Lifts all paint for as long as it is pressed. */
function LiftButton() {
  const bare = useStore(viewStore, (view) => view.bare);
  const lift = () => changeView({ bare: true });
  const layDown = () => changeView({ bare: false });
  return (
    <button
      type="button"
      className="plain-button"
      aria-pressed={bare}
      title="Hold to see the bare photograph (hold L)"
      onPointerDown={lift}
      onPointerUp={layDown}
      onPointerLeave={layDown}
      onKeyDown={(event) => {
        if (event.key === ' ' || event.key === 'Enter') lift();
      }}
      onKeyUp={layDown}
      onBlur={layDown}
    >
      Lift paint
    </button>
  );
}
