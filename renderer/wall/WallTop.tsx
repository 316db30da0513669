import type { SeriesView } from '../../main/host/api/seriesCommands.ts';
import { dialogStore } from '../state/panelStore.ts';
import { useStore } from '../state/store.ts';
import { RoomToggle } from './RoomToggle.tsx';
import { settingsStore, wallScaleStore, wallScales, wallSheetStore } from './wallStore.ts';
import { closeSeries, redoSeries, undoSeries } from './wallWork.ts';

const millimetresPerPx = 25.4 / 96;

/** The series' name, and what can be done with the whole of it. */
export function WallTop({ series }: { series: SeriesView }) {
  const history = useStore(settingsStore);
  const longEdgePx = useStore(wallScaleStore);
  const undoStep = history?.past.at(-1);
  const redoStep = history?.future[0];
  const printMm = history?.present.output.printLongEdgeMm ?? 300;
  const reduced = printMm / (longEdgePx * millimetresPerPx);
  return (
    <header className="top">
      <h1 className="top-name" title={series.folder}>
        {series.name}
      </h1>
      <span className="top-facts">
        {series.frames.length === 1 ? 'one frame' : `${series.frames.length} frames`}
      </span>
      <RoomToggle />
      <nav className="top-work" aria-label="Work">
        <button
          type="button"
          className="plain-button"
          disabled={!undoStep}
          title={undoStep ? `Undo: ${undoStep.label} (Ctrl Z)` : 'Nothing to undo'}
          onClick={undoSeries}
        >
          Undo
        </button>
        <button
          type="button"
          className="plain-button"
          disabled={!redoStep}
          title={redoStep ? `Redo: ${redoStep.label} (Ctrl Shift Z)` : 'Nothing to redo'}
          onClick={redoSeries}
        >
          Redo
        </button>
        <span className="top-rule" aria-hidden="true" />
        <label className="wall-scale" title="Size of the prints on the screen (+ and −)">
          <span>Print scale</span>
          <input
            className="track-input"
            type="range"
            min={wallScales.leastPx}
            max={wallScales.mostPx}
            step={10}
            value={longEdgePx}
            aria-valuetext={`one to ${reduced.toFixed(1)}`}
            onChange={(event) => wallScaleStore.set(Number(event.target.value))}
          />
          <output>1 : {reduced.toFixed(1)}</output>
        </label>
      </nav>
      <div className="top-end">
        <button
          type="button"
          className="plain-button"
          title="All the keys (?)"
          onClick={() => dialogStore.set('keys')}
        >
          Keys
        </button>
        <button
          type="button"
          className="plain-button"
          title="Take the series down; your changes are kept (Ctrl Shift W)"
          onClick={() => void closeSeries()}
        >
          Take down
        </button>
        <button
          type="button"
          className="plain-button"
          title="Open a photograph or a folder (Ctrl O)"
          onClick={() => dialogStore.set('open')}
        >
          Open…
        </button>
        <button
          type="button"
          className="plain-button"
          title="A sheet of small pictures to send for approval (S)"
          onClick={() => wallSheetStore.set('proof')}
        >
          Proof sheet…
        </button>
        <button
          type="button"
          className="ink-button"
          title="Paint every frame to a file (R)"
          onClick={() => wallSheetStore.set('run')}
        >
          Paint the series…
        </button>
      </div>
    </header>
  );
}
