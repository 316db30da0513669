import type { MatchParts } from '../../core/series/frameMatch.ts';
import { partsOfFrame, type SeriesSettings } from '../../core/series/seriesDocument.ts';
import { matchParts, setMatchAmount } from './wallWork.ts';

const partWords: readonly { part: keyof MatchParts; label: string; help: string }[] = [
  { part: 'tone', label: 'Tone and colour', help: 'Light, contrast and cast as in the lead.' },
  { part: 'noise', label: 'Noise', help: 'Each photo’s own grain is left out of the paint.' },
  { part: 'detail', label: 'Detail', help: 'As much of each frame lies in flat paint.' },
  { part: 'ink', label: 'Ink', help: 'As much line as in the lead.' },
];

/** How far the series is matched to its lead, and in what. */
export function MatchControls({ settings }: { settings: SeriesSettings }) {
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

/** What is matched, of the series or of the chosen frames. */
export function PartsChooser({
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
