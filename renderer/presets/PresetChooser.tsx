import { useEffect, useRef } from 'react';
import type { Parameters } from '../../core/parameters/table.ts';
import { parameterKeys } from '../../core/parameters/table.ts';
import type { OpenedPhoto, PresetOffer } from '../../main/host/api/hostCommands.ts';
import { changeLook, type Look } from '../state/lookStore.ts';
import { sessionStore } from '../state/photoStore.ts';
import { useStore } from '../state/store.ts';
import { presetPictureStore } from './presetPictures.ts';

/** The presets, each with a small picture of this photo painted by it. */
export function PresetChooser({ look, photo }: { look: Look; photo: OpenedPhoto }) {
  const presets = useStore(sessionStore, (session) => session?.presets);
  const pictures = useStore(presetPictureStore);
  const isChanged = !isSame(look.parameters, look.presetParameters);
  const shape = photo.widthPx / photo.heightPx;
  return (
    <>
      <p className="panel-sentence">Where the painting starts from. Undo brings your own changes back.</p>
      <fieldset className="presets">
        <legend className="unseen">Preset</legend>
        {presets?.map((preset) => {
          const isChosen = preset.name === look.presetId;
          return (
            <label key={preset.name} className="preset">
              <input
                className="unseen"
                type="radio"
                name="preset"
                value={preset.name}
                checked={isChosen}
                onChange={() => applyPreset(preset)}
              />
              <SmallPicture picture={pictures.get(preset.name)} shape={shape} />
              <span className="preset-words">
                <span className="preset-name">{preset.title}</span>
                <span className="preset-sentence">{preset.description}</span>
                {isChosen && isChanged && <span className="preset-changed">with changes of your own</span>}
              </span>
            </label>
          );
        })}
      </fieldset>
      {isChanged && (
        <button
          type="button"
          className="quiet-button"
          onClick={() => changeLook({ parameters: look.presetParameters, lifted: {} }, 'Back to the preset')}
        >
          Back to the preset as it is
        </button>
      )}
    </>
  );
}

function applyPreset(preset: PresetOffer): void {
  changeLook(
    {
      presetId: preset.name,
      presetParameters: preset.parameters,
      parameters: preset.parameters,
      lifted: {},
    },
    `Preset ${preset.title}`,
  );
}

function isSame(a: Parameters, b: Parameters): boolean {
  return parameterKeys.every((key) => a[key] === b[key]);
}

function SmallPicture({ picture, shape }: { picture: ImageData | undefined; shape: number }) {
  const canvas = useRef<HTMLCanvasElement>(null);
  useEffect(() => {
    if (!canvas.current || !picture) return;
    canvas.current.width = picture.width;
    canvas.current.height = picture.height;
    canvas.current.getContext('2d')?.putImageData(picture, 0, 0);
  }, [picture]);
  return (
    <span
      className="preset-picture"
      aria-hidden="true"
      style={{ aspectRatio: Math.min(1.8, Math.max(0.8, shape)) }}
    >
      <canvas ref={canvas} className={picture ? 'is-there' : ''} />
    </span>
  );
}
