import { useState } from 'react';
import { type FigureKey, figureTable } from '../../core/series/frameFigures.ts';
import type { MatchParts } from '../../core/series/frameMatch.ts';
import { lookOfFrame, partsOfFrame, type SeriesSettings } from '../../core/series/seriesDocument.ts';
import type { FrameView, SeriesView } from '../../main/host/api/seriesCommands.ts';
import { sessionStore } from '../state/photoStore.ts';
import { useStore } from '../state/store.ts';
import { chooseNone, compareChosen } from './choosing.ts';
import { lookWords } from './lookWords.ts';
import { chosenStore } from './wallStore.ts';
import {
  applyRemedy,
  dropOverrides,
  easelLook,
  layLook,
  leaveOut,
  makeLead,
  matchParts,
  openOnEasel,
  remedyWords,
  setMatchAmount,
} from './wallWork.ts';

interface PageProps {
  series: SeriesView;
  settings: SeriesSettings;
}

/** What can be done with the series, or with the frames that are chosen. */
export function WallPanel({ series, settings }: PageProps) {
  const { frameIds } = useStore(chosenStore);
  const chosen = series.frames.filter(({ frameId }) => frameIds.has(frameId));
  return (
    <aside
      className="panel wall-panel"
      aria-label={chosen.length > 0 ? 'The chosen frames' : 'The whole series'}
    >
      {chosen.length > 0 ? (
        <ChosenPage series={series} settings={settings} chosen={chosen} />
      ) : (
        <SeriesPage series={series} settings={settings} />
      )}
    </aside>
  );
}

function SeriesPage({ series, settings }: PageProps) {
  const odd = series.frames.filter(
    ({ frameId, odd }) => odd && !odd.isMatched && !settings.leftOut.includes(frameId),
  );
  const measuring = series.frames.filter(({ state }) => state === 'waiting' || state === 'measuring').length;
  return (
    <section className="panel-page" aria-labelledby="wall-page-name">
      <h2 id="wall-page-name">The series</h2>
      <p className="panel-sentence">{seriesInWords(series, settings)}</p>
      <LookChooser settings={settings} frameIds={null} />
      <MatchControls settings={settings} />
      <h3>Odd ones out</h3>
      {odd.length === 0 ? (
        <p className="panel-sentence">
          {measuring > 0 ? 'None found so far.' : 'None: every frame goes with the rest.'}
        </p>
      ) : (
        <ul className="odd-list">
          {odd.map(({ frameId, odd: one }) => (
            <li key={frameId}>
              <b>{frameId.replace(/\.[^.]+$/, '')}</b> {one!.reason}
              {one!.remedies.map((remedy) => (
                <button
                  key={remedy}
                  type="button"
                  className="plain-button"
                  onClick={() => applyRemedy(remedy, frameId)}
                >
                  {remedyWords[remedy]}
                  <span className="unseen">: {frameId}</span>
                </button>
              ))}
            </li>
          ))}
        </ul>
      )}
      <p className="wall-status" role="status">
        {measuring > 0
          ? `Measuring the frames: ${series.frames.length - measuring} of ${series.frames.length}`
          : ''}
      </p>
      {series.coming > 0 && (
        <p className="panel-sentence">
          {series.coming === 1 ? 'One more plate is' : `${series.coming} more plates are`} being made.
        </p>
      )}
      {series.problems.map(({ name, message }) => (
        <p key={`${name} ${message}`} className="fault">
          {message}
        </p>
      ))}
    </section>
  );
}

function seriesInWords({ frames }: SeriesView, { leftOut, lead }: SeriesSettings): string {
  const count = frames.length === 1 ? 'One frame' : `${frames.length} frames`;
  const out = leftOut.length === 0 ? '' : `, ${leftOut.length} left out`;
  const leads = lead && leftOut.includes(lead) ? `${lead} leads, but is not painted.` : `${lead} leads.`;
  return `${count}${out}. ${lead ? leads : 'None leads.'}`;
}

function ChosenPage({ series, settings, chosen }: PageProps & { chosen: FrameView[] }) {
  const ids = chosen.map(({ frameId }) => frameId);
  const areOut = ids.every((frameId) => settings.leftOut.includes(frameId));
  const haveOwn = settings.overrides.some(({ frames }) => frames.some((frame) => ids.includes(frame)));
  const [one] = chosen;
  const isOne = chosen.length === 1;
  return (
    <section className="panel-page" aria-labelledby="wall-page-name">
      <h2 id="wall-page-name">{isOne ? one.frameId : `${chosen.length} frames`}</h2>
      <p className="panel-sentence">{isOne ? oneInWords(one) : 'What you change here, all of them get.'}</p>
      <div className="desk-words">
        {isOne && settings.lead !== one.frameId && (
          <button type="button" className="plain-button" title="L" onClick={() => makeLead(one.frameId)}>
            Make it the lead
          </button>
        )}
        <button type="button" className="plain-button" title="X" onClick={() => leaveOut(ids, !areOut)}>
          {areOut ? 'Take back' : 'Leave out'}
        </button>
        {(chosen.length === 2 || (isOne && settings.lead && settings.lead !== one.frameId)) && (
          <button
            type="button"
            className="plain-button"
            title="C"
            onClick={() => compareChosen(settings.lead)}
          >
            {isOne ? 'Compare with the lead' : 'Compare the two'}
          </button>
        )}
        {isOne && (
          <button
            type="button"
            className="plain-button"
            title="Enter"
            onClick={() => void openOnEasel(one.frameId)}
          >
            Open on the easel
          </button>
        )}
        {haveOwn && (
          <button type="button" className="plain-button" title="D" onClick={() => dropOverrides(ids)}>
            Drop what is their own
          </button>
        )}
        <button type="button" className="plain-button" title="Escape" onClick={chooseNone}>
          Choose none
        </button>
      </div>
      <LookChooser settings={settings} frameIds={ids} />
      <PartsChooser settings={settings} frameIds={ids} />
      {isOne && one.measured && <Figures frame={one} series={series} />}
    </section>
  );
}

function oneInWords({ widthPx, heightPx, odd, state, message }: FrameView): string {
  if (state === 'unreadable') return message ?? 'It cannot be read.';
  const size = `${widthPx.toLocaleString('en')} × ${heightPx.toLocaleString('en')} px.`;
  if (!odd) return size;
  return `${size} ${odd.reason}${odd.isMatched ? ' The match has brought it in.' : ''}`;
}

/** Preset and state, for the series or for the chosen frames. */
function LookChooser({
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

const partWords: readonly { part: keyof MatchParts; label: string; help: string }[] = [
  { part: 'tone', label: 'Tone and colour', help: 'Light, contrast and cast as in the lead.' },
  { part: 'noise', label: 'Noise', help: 'Each photo’s own grain is left out of the paint.' },
  { part: 'detail', label: 'Detail', help: 'As much of each frame lies in flat paint.' },
  { part: 'ink', label: 'Ink', help: 'As much line as in the lead.' },
];

function MatchControls({ settings }: { settings: SeriesSettings }) {
  const { amount01 } = settings.match;
  return (
    <>
      <h3>Matched to the lead</h3>
      <label className="match-amount">
        <span>How far</span>
        <input
          className="track-input"
          type="range"
          min={0}
          max={100}
          value={Math.round(amount01 * 100)}
          onChange={(event) => setMatchAmount(Number(event.target.value) / 100, false)}
        />
        <output>{Math.round(amount01 * 100)} %</output>
      </label>
      <PartsChooser settings={settings} frameIds={null} />
    </>
  );
}

function PartsChooser({
  settings,
  frameIds,
}: {
  settings: SeriesSettings;
  frameIds: readonly string[] | null;
}) {
  const others = frameIds?.filter((frameId) => frameId !== settings.lead);
  if (others?.length === 0)
    return <p className="panel-sentence">The lead is matched to nothing: the others come to it.</p>;
  const parts = others ? others.map((frameId) => partsOfFrame(settings, frameId)) : [settings.match.parts];
  return (
    <fieldset className="match-parts" disabled={settings.match.amount01 === 0}>
      <legend className={frameIds ? '' : 'unseen'}>What is matched</legend>
      {partWords.map(({ part, label, help }) => (
        <label key={part} title={help}>
          <input
            type="checkbox"
            checked={parts.every((one) => one[part])}
            ref={(element) => {
              if (element)
                element.indeterminate = parts.some((one) => one[part]) && !parts.every((one) => one[part]);
            }}
            onChange={(event) => matchParts({ [part]: event.target.checked }, others ?? null)}
          />
          <span>{label}</span>
        </label>
      ))}
    </fieldset>
  );
}

const shownFigures: readonly FigureKey[] = [
  'lightness',
  'contrast',
  'chroma',
  'planeMm',
  'lineCoverage01',
  'focus',
];

/** A frame's figures beside the middle of the series. */
function Figures({ frame, series }: { frame: FrameView; series: SeriesView }) {
  const measured = series.frames.flatMap((other) => other.measured ?? []);
  const middle = (key: FigureKey) => {
    const sorted = measured.map((figures) => figures[key]).sort((a, b) => a - b);
    return sorted[sorted.length >> 1];
  };
  const write = (key: FigureKey, value: number) => {
    const { unit, digits } = figureTable[key];
    return `${(unit === '%' ? value * 100 : value).toFixed(digits)}${unit === '%' || unit === 'mm' ? ` ${unit}` : ''}`;
  };
  return (
    <table className="figure-table">
      <caption>Figures of its painting</caption>
      <thead>
        <tr>
          <td />
          <th scope="col">this one</th>
          <th scope="col">the middle</th>
        </tr>
      </thead>
      <tbody>
        {shownFigures.map((key) => (
          <tr key={key}>
            <th scope="row">{figureTable[key].label}</th>
            <td>{write(key, frame.measured![key])}</td>
            <td>{write(key, middle(key))}</td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}
