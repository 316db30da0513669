import { useState } from 'react';
import { lookOfFrame, type SeriesSettings } from '../../core/series/seriesDocument.ts';
import { sessionStore } from '../state/photoStore.ts';
import { useStore } from '../state/store.ts';
import { lookWords } from './lookWords.ts';
import { easelLook, layLook } from './wallWork.ts';

/** Preset and state, for the series or for the chosen frames. */
export function LookChooser({
  settings,
  frameIds,
}: {
  settings: SeriesSettings;
  frameIds: readonly string[] | null;
}) {
  const presets = useStore(sessionStore, (session) => session?.presets) ?? [];
  const [preset, setPreset] = useState<string | null>(null);
  const look = frameIds ? lookOfFrame(settings, frameIds[0]) : settings.look;
  const offer = presets.find(({ name }) => name === (preset ?? look.preset)) ?? presets[0];
  const onEasel = easelLook();
  if (!offer) return null;
  const lay = (stateId: string) => {
    const state = offer.states.find(({ id }) => id === stateId);
    if (!state) return;
    const next = { preset: offer.name, stateId: state.id, parameters: state.parameters };
    layLook(next, lookWords(next, presets), frameIds);
    setPreset(null);
  };
  const newest = offer.states[offer.states.length - 1];
  const isMixed = frameIds?.some((frameId) => lookOfFrame(settings, frameId).stateId !== look.stateId);
  return (
    <>
      <h3>Painted by</h3>
      <p className="look-now">{isMixed ? 'Several looks' : lookWords(look, presets)}</p>
      <div className="look-choice">
        <label>
          <span>Preset</span>
          <select
            value={offer.name}
            onChange={(event) => {
              const chosen = presets.find(({ name }) => name === event.target.value);
              const last = chosen?.states[chosen.states.length - 1];
              if (!chosen || !last) return;
              const next = { preset: chosen.name, stateId: last.id, parameters: last.parameters };
              layLook(next, lookWords(next, presets), frameIds);
            }}
          >
            {presets.map(({ name, title }) => (
              <option key={name} value={name}>
                {title}
              </option>
            ))}
          </select>
        </label>
        {offer.states.length > 1 && (
          <label>
            <span>State</span>
            <select
              value={offer.states.some(({ id }) => id === look.stateId) ? look.stateId : newest.id}
              onChange={(event) => lay(event.target.value)}
            >
              {offer.states.map((state) => (
                <option key={state.id} value={state.id}>
                  {lookWords(
                    { preset: offer.name, stateId: state.id, parameters: state.parameters },
                    presets,
                  ).replace(/^.*, /, '')}
                </option>
              ))}
            </select>
          </label>
        )}
      </div>
      {onEasel && (
        <button
          type="button"
          className="plain-button"
          title={lookWords(onEasel, presets)}
          onClick={() => layLook(onEasel, 'The look on the easel', frameIds)}
        >
          Use the look that lies on the easel
        </button>
      )}
    </>
  );
}
