import { type FormEvent, useState } from 'react';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import type { PresetOffer } from '../../main/host/api/memoryCommands.ts';
import {
  addToPreset,
  createPreset,
  describePreset,
  duplicatePreset,
  handOnPreset,
  importPresets,
  removePreset,
  renamePreset,
} from '../app/presetWork.ts';
import type { Look } from '../state/lookStore.ts';

type Asking = 'new' | 'rename' | 'describe' | null;

interface DeskProps {
  /** The preset on the easel; null where it is no longer among the presets. */
  preset: PresetOffer | null;
  look: Look;
  photo: OpenedPhoto;
}

/** What can be done with the preset on the easel, in words. */
export function PresetDesk({ preset, look, photo }: DeskProps) {
  const [asking, setAsking] = useState<Asking>(null);
  const isOwn = preset !== null && !preset.isBuiltIn;
  const act = (kind: Exclude<Asking, null>) => () => setAsking(asking === kind ? null : kind);
  return (
    <section className="preset-desk" aria-label={preset ? `The preset ${preset.title}` : 'Presets'}>
      {preset?.isBuiltIn && (
        <p className="panel-sentence">
          {preset.title} is built in and stays as it is. A preset of your own can be changed and handed on.
        </p>
      )}
      <div className="desk-words">
        <button type="button" className="plain-button" aria-expanded={asking === 'new'} onClick={act('new')}>
          Make a preset of this…
        </button>
        {isOwn && (
          <button
            type="button"
            className="plain-button"
            onClick={() => void addToPreset(preset.name, preset.title, look.parameters)}
          >
            Add this as a state
          </button>
        )}
        {preset && (
          <button type="button" className="plain-button" onClick={() => void duplicatePreset(preset.name)}>
            Duplicate
          </button>
        )}
        {isOwn && (
          <>
            <button
              type="button"
              className="plain-button"
              aria-expanded={asking === 'rename'}
              onClick={act('rename')}
            >
              Rename…
            </button>
            <button
              type="button"
              className="plain-button"
              aria-expanded={asking === 'describe'}
              onClick={act('describe')}
            >
              Describe…
            </button>
            <button
              type="button"
              className="plain-button"
              onClick={() => void removePreset(preset.name, preset.title)}
            >
              Put in the bin
            </button>
          </>
        )}
        {preset && (
          <button
            type="button"
            className="plain-button"
            title={`Writes a file into ${photo.folder}`}
            onClick={() => void handOnPreset(preset.name, preset.title, photo.folder)}
          >
            Hand on as a file
          </button>
        )}
        <TakeIn />
      </div>
      {asking === 'new' && (
        <AskForWords
          label="Name of the new preset"
          start=""
          verb="Make it"
          onDone={(title) => {
            setAsking(null);
            void createPreset(title, look.parameters);
          }}
        />
      )}
      {asking === 'rename' && preset && (
        <AskForWords
          label="New name"
          start={preset.title}
          verb="Rename"
          onDone={(title) => {
            setAsking(null);
            void renamePreset(preset.name, title);
          }}
        />
      )}
      {asking === 'describe' && preset && (
        <AskForWords
          label="What it is good for"
          start={preset.description}
          verb="Write it down"
          onDone={(words) => {
            setAsking(null);
            void describePreset(preset.name, words);
          }}
        />
      )}
    </section>
  );
}

/** A file of presets, chosen in the browser's own dialog. */
function TakeIn() {
  return (
    <label className="plain-button desk-file">
      Take in from a file…
      <input
        className="unseen"
        type="file"
        accept=".json,application/json"
        onChange={(event) => {
          const [file] = event.target.files ?? [];
          event.target.value = '';
          if (file) void importPresets(file);
        }}
      />
    </label>
  );
}

interface AskProps {
  label: string;
  start: string;
  verb: string;
  onDone: (words: string) => void;
}

/** The field was asked for by the button just pressed. */
const focusAtOnce = (element: HTMLInputElement | null) => element?.focus();

function AskForWords({ label, start, verb, onDone }: AskProps) {
  const [words, setWords] = useState(start);
  const submit = (event: FormEvent) => {
    event.preventDefault();
    if (words.trim() !== '') onDone(words.trim());
  };
  return (
    <form className="desk-ask" onSubmit={submit}>
      <label>
        <span>{label}</span>
        <input
          type="text"
          ref={focusAtOnce}
          maxLength={120}
          value={words}
          onChange={(e) => setWords(e.target.value)}
        />
      </label>
      <button type="submit" className="quiet-button" disabled={words.trim() === ''}>
        {verb}
      </button>
    </form>
  );
}
