import { useEffect, useState } from 'react';
import { type Parameters, parameterKeys } from '../../core/parameters/table.ts';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import type { PresetOffer } from '../../main/host/api/memoryCommands.ts';
import { layPreset } from '../app/memoryWork.ts';
import { refreshPresets } from '../app/presetWork.ts';
import { changeLook, type Look } from '../state/lookStore.ts';
import { sessionStore } from '../state/photoStore.ts';
import { useStore } from '../state/store.ts';
import { PresetBin } from './PresetBin.tsx';
import { PresetDesk } from './PresetDesk.tsx';
import { presetPictureStore } from './presetPictures.ts';
import { SmallPicture } from './SmallPicture.tsx';

/** The presets, each with a small picture of this photo painted by it. */
export function PresetChooser({ look, photo }: { look: Look; photo: OpenedPhoto }) {
  const presets = useStore(sessionStore, (session) => session?.presets);
  const problems = useStore(sessionStore, (session) => session?.presetProblems);
  const pictures = useStore(presetPictureStore);
  const [sought, setSought] = useState('');
  const isChanged = !isSame(look.parameters, look.presetParameters);
  const shape = photo.widthPx / photo.heightPx;
  const found = presets?.filter((preset) => isFound(preset, sought)) ?? [];
  const chosen = presets?.find((preset) => preset.name === look.presetId);
  useEffect(() => void refreshPresets(), []);
  return (
    <>
      <p className="panel-sentence">Where the painting starts from. Undo brings your own changes back.</p>
      <label className="preset-search">
        <span>Find</span>
        <input
          type="text"
          value={sought}
          placeholder="a name or a word"
          onChange={(event) => setSought(event.target.value)}
        />
      </label>
      <fieldset className="presets">
        <legend className="unseen">Preset</legend>
        {found.map((preset) => (
          <label key={preset.name} className="preset">
            <input
              className="unseen"
              type="radio"
              name="preset"
              value={preset.name}
              checked={preset.name === look.presetId}
              onChange={() => void layPreset(preset.name, preset.title)}
            />
            <SmallPicture picture={pictures.get(preset.name)} shape={shape} />
            <span className="preset-words">
              <span className="preset-name">{preset.title}</span>
              <span className="preset-sentence">{preset.description}</span>
              {!preset.isBuiltIn && <span className="preset-own">{ownInWords(preset)}</span>}
              {preset.name === look.presetId && isChanged && (
                <span className="preset-changed">with changes of your own</span>
              )}
            </span>
          </label>
        ))}
      </fieldset>
      {found.length === 0 && <p className="panel-sentence">No preset has “{sought}” in its name or words.</p>}
      {isChanged && (
        <button
          type="button"
          className="quiet-button"
          onClick={() => changeLook({ parameters: look.presetParameters, lifted: {} }, 'Back to the state')}
        >
          Back to the state as it was kept
        </button>
      )}
      <PresetDesk key={chosen?.name} preset={chosen ?? null} look={look} photo={photo} />
      <PresetBin />
      {problems?.map((problem) => (
        <p key={problem} className="fault">
          {problem}
        </p>
      ))}
    </>
  );
}

function ownInWords({ states }: PresetOffer): string {
  return states.length === 1 ? 'your own' : `your own, ${states.length} states`;
}

function isFound({ title, description }: PresetOffer, sought: string): boolean {
  const words = sought.toLowerCase().split(/\s+/).filter(Boolean);
  const text = `${title} ${description}`.toLowerCase();
  return words.every((word) => text.includes(word));
}

function isSame(a: Parameters, b: Parameters): boolean {
  return parameterKeys.every((key) => a[key] === b[key]);
}
