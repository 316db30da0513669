import { Fragment, useEffect, useState } from 'react';
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
import { PresetShelfSteps } from './PresetShelfSteps.tsx';
import { presetPictureStore } from './presetPictures.ts';
import { SmallPicture } from './SmallPicture.tsx';

const none: readonly PresetOffer[] = [];

/** The presets, each with a small picture of this photo painted by it. */
export function PresetChooser({ look, photo }: { look: Look; photo: OpenedPhoto }) {
  const presets = useStore(sessionStore, (session) => session?.presets ?? none);
  const problems = useStore(sessionStore, (session) => session?.presetProblems);
  const pictures = useStore(presetPictureStore);
  const [sought, setSought] = useState('');
  const shape = photo.widthPx / photo.heightPx;
  const found = presets.filter((preset) => isFound(preset, sought));
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
      <PresetShelfSteps presets={presets} look={look} photo={photo} />
      <fieldset className="presets">
        <legend className="unseen">Preset</legend>
        {found.map((preset) => (
          <Fragment key={preset.name}>
            <label className="preset">
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
              </span>
            </label>
            {preset.name === look.presetId && (
              <>
                <BackToKept look={look} />
                <PresetDesk preset={preset} look={look} photo={photo} />
              </>
            )}
          </Fragment>
        ))}
      </fieldset>
      {found.length === 0 && <p className="panel-sentence">No preset has “{sought}” in its name or words.</p>}
      <PresetBin />
      {problems?.map((problem) => (
        <p key={problem} className="fault">
          {problem}
        </p>
      ))}
    </>
  );
}

/** Drops the changes over the state on the easel; undo brings them back. */
function BackToKept({ look }: { look: Look }) {
  if (isSame(look.parameters, look.presetParameters)) return null;
  return (
    <p className="preset-changed">
      With changes of your own.
      <button
        type="button"
        className="plain-button"
        onClick={() => changeLook({ parameters: look.presetParameters, lifted: {} }, 'Back to the state')}
      >
        Back to the state as kept
      </button>
    </p>
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
