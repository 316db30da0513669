import { useState } from 'react';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import type { PresetOffer } from '../../main/host/api/memoryCommands.ts';
import {
  addToPreset,
  describePreset,
  duplicatePreset,
  handOnPresets,
  removePreset,
  renamePreset,
} from '../app/presetWork.ts';
import type { Look } from '../state/lookStore.ts';
import { AskForWords } from './AskForWords.tsx';

interface DeskProps {
  /** The preset on the easel. */
  preset: PresetOffer;
  look: Look;
  photo: OpenedPhoto;
}

/** What can be done with the preset on the easel, in words. */
export function PresetDesk({ preset, look, photo }: DeskProps) {
  const { name, title, isBuiltIn } = preset;
  return (
    <section className="preset-desk" aria-label={`What can be done with ${title}`}>
      {isBuiltIn ? (
        <p className="preset-sentence">
          {title} is built in and stays as it is. A copy of it is your own and can be changed.
        </p>
      ) : (
        <OwnSteps preset={preset} look={look} />
      )}
      <div className="desk-words">
        <button type="button" className="plain-button" onClick={() => void duplicatePreset(name)}>
          Duplicate
        </button>
        <button
          type="button"
          className="plain-button"
          title={`Writes a file into ${photo.folder}`}
          onClick={() => void handOnPresets([name], title, photo.folder)}
        >
          Hand on as a file
        </button>
        {!isBuiltIn && (
          <button type="button" className="plain-button" onClick={() => void removePreset(name, title)}>
            Put in the bin
          </button>
        )}
      </div>
    </section>
  );
}

/** The steps that change a preset; built-in ones have none. */
function OwnSteps({ preset, look }: { preset: PresetOffer; look: Look }) {
  const { name, title, description } = preset;
  const [asking, setAsking] = useState<'rename' | 'describe' | null>(null);
  const ask = (kind: 'rename' | 'describe') => () => setAsking(asking === kind ? null : kind);
  const answer = (step: (words: string) => Promise<void>) => (words: string) => {
    setAsking(null);
    void step(words);
  };
  const onCancel = () => setAsking(null);
  return (
    <>
      <div className="desk-words">
        <button
          type="button"
          className="plain-button"
          title={`Keeps the easel as it is as the next state of ${title}, for other photographs too`}
          onClick={() => void addToPreset(name, title, look.parameters)}
        >
          Add the easel as a state
        </button>
        <button
          type="button"
          className="plain-button"
          aria-expanded={asking === 'rename'}
          onClick={ask('rename')}
        >
          Rename…
        </button>
        <button
          type="button"
          className="plain-button"
          aria-expanded={asking === 'describe'}
          onClick={ask('describe')}
        >
          Describe…
        </button>
      </div>
      {asking === 'rename' && (
        <AskForWords
          label="New name"
          start={title}
          verb="Rename"
          longest={120}
          onDone={answer((words) => renamePreset(name, words))}
          onCancel={onCancel}
        />
      )}
      {asking === 'describe' && (
        <AskForWords
          label="What it is good for"
          start={description}
          verb="Write it down"
          longest={400}
          onDone={answer((words) => describePreset(name, words))}
          onCancel={onCancel}
        />
      )}
    </>
  );
}
