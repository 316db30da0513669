import { type FormEvent, useEffect, useState } from 'react';
import { parameterKeys } from '../../core/parameters/table.ts';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { keepAsState } from '../app/memoryWork.ts';
import type { Look } from '../state/lookStore.ts';
import { memoryStore } from '../state/memoryStore.ts';
import { panelStore } from '../state/panelStore.ts';
import { useStore } from '../state/store.ts';
import { MemorySign } from './MemorySign.tsx';
import { StatesThread } from './StatesThread.tsx';
import { keepingStore } from './threadCalls.ts';

/** Under the headline: the preset, the thread of its states on this photo, and how a new one is kept. */
export function ThreadRow({ photo, look }: { photo: OpenedPhoto; look: Look }) {
  const memory = useStore(memoryStore);
  const history = memory?.recipe.histories.find(({ preset }) => preset === look.presetId);
  if (!memory || !history) return <div className="thread-row" />;
  const isReadOnly = memory.access === 'readOnly';
  const hasUnkeptWork = parameterKeys.some((key) => look.parameters[key] !== look.presetParameters[key]);
  return (
    <nav className="thread-row" aria-label="States">
      <button
        type="button"
        className="thread-preset"
        title="Presets (P)"
        onClick={() => panelStore.set('presets')}
      >
        {history.title}
      </button>
      <StatesThread
        history={history}
        look={look}
        photo={photo}
        hasUnkeptWork={hasUnkeptWork}
        isReadOnly={isReadOnly}
      />
      <MemorySign memory={memory} />
      <KeepForm hasUnkeptWork={hasUnkeptWork} isReadOnly={isReadOnly} />
    </nav>
  );
}

/** The field was asked for by the key or button just pressed. */
const focusAtOnce = (element: HTMLInputElement | null) => element?.focus();

function KeepForm({ hasUnkeptWork, isReadOnly }: { hasUnkeptWork: boolean; isReadOnly: boolean }) {
  const isOpen = useStore(keepingStore);
  const [note, setNote] = useState('');
  const close = () => {
    keepingStore.set(false);
    setNote('');
  };
  const submit = (event: FormEvent) => {
    event.preventDefault();
    void keepAsState(note.trim());
    close();
  };
  useEffect(() => () => keepingStore.set(false), []);
  if (!isOpen || isReadOnly)
    return (
      <button
        type="button"
        className={hasUnkeptWork ? 'quiet-button thread-keep is-wanted' : 'quiet-button thread-keep'}
        disabled={isReadOnly}
        title="Keeps the easel as it is as the next state (K)"
        onClick={() => keepingStore.set(true)}
      >
        Keep as new state
      </button>
    );
  return (
    <form className="thread-form" onSubmit={submit}>
      <label>
        <span className="unseen">Note of the new state</span>
        <input
          type="text"
          ref={focusAtOnce}
          placeholder="a note, if you like"
          maxLength={400}
          value={note}
          onChange={(event) => setNote(event.target.value)}
          onKeyDown={(event) => {
            event.stopPropagation();
            if (event.key === 'Escape') close();
          }}
        />
      </label>
      <button type="submit" className="ink-button">
        Keep
      </button>
      <button type="button" className="plain-button" onClick={close}>
        Not now
      </button>
    </form>
  );
}
