import { setParameter } from '../state/lookStore.ts';

/** Widths in millimetres on the print, each about half as wide again as a hand would notice. */
const brushesMm = [0.8, 1.6, 3.2, 5.5, 9] as const;
/** CSS defines 96 px as 25.4 mm: strokes are drawn at the size they will have on the print. */
const cssPxPerMm = 96 / 25.4;

/** Strokes drawn at print scale; picking one sets the brush. */
export function BrushChooser({ valueMm }: { valueMm: number }) {
  return (
    <fieldset className="brushes">
      <legend className="unseen">Brush, drawn strokes at print size</legend>
      {brushesMm.map((mm) => (
        <label key={mm} className="brush" title={`${mm} mm`}>
          <input
            className="unseen"
            type="radio"
            name="brush"
            value={mm}
            checked={Math.abs(valueMm - mm) < 0.051}
            onChange={() => setParameter('body.brush', `${mm}mm`, null)}
          />
          <Stroke widthMm={mm} />
          <span className="unseen">{mm} mm</span>
        </label>
      ))}
    </fieldset>
  );
}

/** One touch of a flat brush: square where it is set down, ragged where it is lifted. */
function Stroke({ widthMm }: { widthMm: number }) {
  const height = Math.max(2, widthMm * cssPxPerMm);
  const width = height * 1.5 + 9;
  const ragged = [0.06, -0.05, 0.1, -0.02, 0.08, -0.06, 0.03];
  const lift = ragged
    .map((depth, index) => {
      const y = height * (1 - (index + 1) / ragged.length);
      return `L ${(width * (0.94 - Math.abs(depth))).toFixed(1)} ${(y + height / ragged.length / 2).toFixed(1)} L ${(width * (0.94 + depth * 0.6)).toFixed(1)} ${y.toFixed(1)}`;
    })
    .join(' ');
  const path = `M ${width * 0.05} ${height * 0.12} Q 0 ${height * 0.5} ${width * 0.03} ${height * 0.92} Q ${width * 0.4} ${height * 1.03} ${width * 0.94} ${height} ${lift} Q ${width * 0.4} ${-height * 0.04} ${width * 0.05} ${height * 0.12} Z`;
  const bristles = Math.max(0, Math.round(height / 5) - 1);
  return (
    <svg
      className="stroke"
      width={width}
      height={height}
      viewBox={`0 0 ${width} ${height}`}
      aria-hidden="true"
      focusable="false"
    >
      <path className="stroke-body" d={path} />
      {Array.from({ length: bristles }, (_, index) => {
        const y = ((index + 1) * height) / (bristles + 1);
        const start = width * (0.12 + 0.1 * ((index * 7) % 5) * 0.4);
        const end = width * (0.9 - 0.06 * ((index * 5) % 4));
        return (
          <path
            key={y}
            className={index % 2 === 0 ? 'stroke-bristle' : 'stroke-bristle stroke-bristle-light'}
            d={`M ${start} ${y} Q ${width * 0.5} ${y - height * 0.025} ${end} ${y}`}
          />
        );
      })}
    </svg>
  );
}
