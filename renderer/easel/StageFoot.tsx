import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { changeOutput, useOutput } from '../app/outputWork.ts';
import { ValueField } from '../controls/ValueField.tsx';
import { GamutSign } from '../print/GamutSign.tsx';
import { inMm, longestPrintMm, planOf, readLengthMm, shortestPrintMm } from '../print/printMeasures.ts';
import { useStore } from '../state/store.ts';
import { chooseSurround, placedViewStore, type Surround, viewStore } from '../state/viewStore.ts';
import { fitPicture, showFullSize, zoomPicture } from './viewMoves.ts';

const surrounds: readonly { value: Surround; name: string }[] = [
  { value: 'light', name: 'Light surround' },
  { value: 'middle', name: 'Middle grey surround' },
  { value: 'dark', name: 'Dark surround' },
];

/** How the picture is looked at, and the size it will be printed at. */
export function StageFoot({ photo }: { photo: OpenedPhoto }) {
  const placed = useStore(placedViewStore);
  const { intent, surround, stage } = useStore(viewStore);
  const output = useOutput();
  const scale = placed?.scale ?? 1;
  const { widthMm, heightMm, ppi } = planOf(photo, output);
  return (
    <div className="stage-foot">
      <button
        type="button"
        className="foot-button"
        aria-pressed={intent.kind === 'fit'}
        title="Fit the picture to the window (0)"
        onClick={fitPicture}
      >
        Fit
      </button>
      <button
        type="button"
        className="foot-button"
        aria-pressed={intent.kind === 'free' && scale === 1}
        title="One pixel of the photograph on one of the screen (1)"
        onClick={showFullSize}
      >
        100 %
      </button>
      <ValueField
        label="Zoom, typed"
        shown={`${scale < 0.1 ? (scale * 100).toFixed(1) : Math.round(scale * 100)} %`}
        onTyped={(text) => typeZoom(text, stage)}
      />
      <span className="foot-rule" aria-hidden="true" />
      <span className="foot-print">
        Print{' '}
        <ValueField
          label="Long edge of the print, typed"
          shown={`${inMm(output.printLongEdgeMm)} mm`}
          onTyped={typePrintLongEdge}
        />{' '}
        × {inMm(Math.min(widthMm, heightMm))} mm, {Math.round(ppi)} ppi
      </span>
      <GamutSign />
      <fieldset className="surrounds">
        <legend className="unseen">Surround</legend>
        {surrounds.map(({ value, name }) => (
          <label key={value} className={`surround surround-${value}`} title={name}>
            <input
              className="unseen"
              type="radio"
              name="surround"
              value={value}
              checked={surround === value}
              onChange={() => chooseSurround(value)}
            />
            <span className="surround-chip" aria-hidden="true" />
            <span className="unseen">{name}</span>
          </label>
        ))}
      </fieldset>
    </div>
  );
}

function typeZoom(text: string, stage: { widthPx: number; heightPx: number }): string | null {
  const percent = Number(text.replaceAll(/[\s%]/g, '').replace(',', '.'));
  if (!Number.isFinite(percent) || percent <= 0) return 'Takes a percentage, such as 50 %.';
  zoomPicture(percent / 100, { x: stage.widthPx / 2, y: stage.heightPx / 2 });
  return null;
}

function typePrintLongEdge(text: string): string | null {
  const mm = readLengthMm(text);
  if (mm === null || mm < shortestPrintMm || mm > longestPrintMm)
    return `Takes ${shortestPrintMm} to ${longestPrintMm} mm; cm and in may be written too.`;
  changeOutput({ printLongEdgeMm: mm });
  return null;
}
