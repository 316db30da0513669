import type { SeriesSettings } from '../../core/series/seriesDocument.ts';
import type { FrameView, SeriesView } from '../../main/host/api/seriesCommands.ts';
import { useStore } from '../state/store.ts';
import { chooseNone, compareChosen } from './choosing.ts';
import { FrameFigures } from './FrameFigures.tsx';
import { LookChooser } from './LookChooser.tsx';
import { MatchControls, PartsChooser } from './MatchChooser.tsx';
import { chosenStore } from './wallStore.ts';
import { applyRemedy, dropOverrides, leaveOut, makeLead, openOnEasel, remedyWords } from './wallWork.ts';

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
      {isOne && one.measured && <FrameFigures frame={one} series={series} />}
    </section>
  );
}

function oneInWords({ widthPx, heightPx, odd, state, message }: FrameView): string {
  if (state === 'unreadable') return message ?? 'It cannot be read.';
  const size = `${widthPx.toLocaleString('en')} × ${heightPx.toLocaleString('en')} px.`;
  if (!odd) return size;
  return `${size} ${odd.reason}${odd.isMatched ? ' The match has brought it in.' : ''}`;
}
