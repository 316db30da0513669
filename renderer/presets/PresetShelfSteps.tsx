import { useState } from 'react';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import type { PresetOffer } from '../../main/host/api/memoryCommands.ts';
import { createPreset, handOnPresets, importPresets } from '../app/presetWork.ts';
import { takeDocument } from '../app/takeDocument.ts';
import type { Look } from '../state/lookStore.ts';
import { AskForWords } from './AskForWords.tsx';

interface StepsProps {
  presets: readonly PresetOffer[];
  look: Look;
  photo: OpenedPhoto;
}

/** What can be done with the shelf of presets as a whole. */
export function PresetShelfSteps({ presets, look, photo }: StepsProps) {
  const [isAsking, setAsking] = useState(false);
  const own = presets.filter(({ isBuiltIn }) => !isBuiltIn);
  return (
    <section className="shelf-steps" aria-label="All presets">
      <div className="desk-words">
        <button
          type="button"
          className="plain-button"
          aria-expanded={isAsking}
          onClick={() => setAsking(!isAsking)}
        >
          Make a preset of this…
        </button>
        <TakeIn />
        {own.length > 1 && (
          <button
            type="button"
            className="plain-button"
            title={`Writes one file into ${photo.folder}`}
            onClick={() => {
              const names = own.map(({ name }) => name);
              void handOnPresets(names, 'My presets', photo.folder);
            }}
          >
            Hand on all of your own
          </button>
        )}
      </div>
      {isAsking && (
        <AskForWords
          label="Name of the new preset"
          start=""
          verb="Make it"
          longest={120}
          onDone={(title) => {
            setAsking(false);
            void createPreset(title, look.parameters);
          }}
          onCancel={() => setAsking(false)}
        />
      )}
    </section>
  );
}

/** A file of presets, or a recipe for its look, chosen in the browser's own dialog. */
function TakeIn() {
  const take = async (file: File) => {
    if (!(await takeDocument(file))) await importPresets(file);
  };
  return (
    <label
      className="plain-button desk-file"
      title="Presets that were handed on, or another photograph’s recipe: its look comes to the easel"
    >
      Take in from a file…
      <input
        className="unseen"
        type="file"
        accept=".json,application/json"
        onChange={(event) => {
          const [file] = event.target.files ?? [];
          event.target.value = '';
          if (file) void take(file);
        }}
      />
    </label>
  );
}
