import { useEffect } from 'react';
import { differences } from '../../core/presets/differences.ts';
import { stratumName } from '../state/lookStore.ts';
import type { Comparison } from '../state/memoryStore.ts';
import { endComparing, lookOfSide, nameOfSide, stateOfSide, toggleFlicker, turnOver } from './comparing.ts';

const turnEveryMs = 800;

/** Two states side by side: how they are shown, and the table of what differs. */
export function ComparePage({ comparison }: { comparison: Comparison }) {
  const { left, right, isFlickering } = comparison;
  useTurns(isFlickering);
  const before = lookOfSide(left);
  const after = lookOfSide(right);
  const rows = before && after ? differences(before.parameters, after.parameters) : [];
  return (
    <aside className="panel" aria-label="Comparison">
      <section className="panel-page compare-page" aria-labelledby="compare-name">
        <h2 id="compare-name">
          {nameOfSide(left)} <span className="compare-against">against</span> {nameOfSide(right)}
        </h2>
        <p className="panel-sentence">
          {noteOf(left)} {noteOf(right)}
        </p>
        <div className="desk-words">
          <button type="button" className="plain-button" aria-pressed={isFlickering} onClick={toggleFlicker}>
            Let them take turns
          </button>
          {isFlickering && (
            <button type="button" className="plain-button" onClick={turnOver}>
              Turn over
            </button>
          )}
          <button type="button" className="quiet-button" title="Escape" onClick={endComparing}>
            Back to the easel
          </button>
        </div>
        {rows.length === 0 ? (
          <p className="panel-sentence">They are painted alike.</p>
        ) : (
          <table className="compare-table">
            <caption className="unseen">What differs</caption>
            <thead>
              <tr>
                <th scope="col">What differs</th>
                <th scope="col">{nameOfSide(left)}</th>
                <th scope="col">{nameOfSide(right)}</th>
              </tr>
            </thead>
            <tbody>
              {rows.map(({ key, label, stratum, beforeText, afterText }) => (
                <tr key={key}>
                  <th scope="row">
                    {label} <span className="compare-stratum">{stratumName(stratum)}</span>
                  </th>
                  <td>{beforeText}</td>
                  <td>{afterText}</td>
                </tr>
              ))}
            </tbody>
          </table>
        )}
      </section>
    </aside>
  );
}

function noteOf(side: Comparison['left']): string {
  const note = stateOfSide(side)?.note;
  return note ? `${nameOfSide(side)}: ${note}.` : '';
}

/** By the clock, unless motion is unwelcome: then they are turned over by hand. */
function useTurns(isFlickering: boolean): void {
  useEffect(() => {
    if (!isFlickering || matchMedia('(prefers-reduced-motion: reduce)').matches) return;
    turnOver();
    const timer = setInterval(turnOver, turnEveryMs);
    return () => clearInterval(timer);
  }, [isFlickering]);
}
