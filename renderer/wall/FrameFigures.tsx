import { type FigureKey, figureTable } from '../../core/series/frameFigures.ts';
import type { FrameView, SeriesView } from '../../main/host/api/seriesCommands.ts';

const shownFigures: readonly FigureKey[] = [
  'lightness',
  'contrast',
  'chroma',
  'planeMm',
  'lineCoverage01',
  'focus',
];

/** A frame's figures beside the middle of the series. */
export function FrameFigures({ frame, series }: { frame: FrameView; series: SeriesView }) {
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
