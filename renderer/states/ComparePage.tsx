import { useEffect, useRef } from 'react';
import { differences } from '../../core/presets/differences.ts';
import { stratumName } from '../state/lookStore.ts';
import type { Comparison } from '../state/memoryStore.ts';
import { endComparing, lookOfSide, nameOfSide, toggleFlicker, turnOver, wordsOfSide } from './comparing.ts';

const turnEveryMs = 800;

/** Two states side by side: how they are shown, and the table of what differs. */
export function ComparePage({ comparison }: { comparison: Comparison }) {
  const { left, right, isFlickering } = comparison;
  useTurns(isFlickering);
  const before = lookOfSide(left);
  const after = lookOfSide(right);
  const rows = before && after ? differences(before.parameters, after.parameters) : [];
  const page = useRef<HTMLElement>(null);
  // Keys go on from here, and the card that was open makes room.
  useEffect(() => page.current?.focus(), []);
  return (
    <aside className="panel" aria-label="Comparison">
      <section ref={page} className="panel-page compare-page" aria-labelledby="compare-name" tabIndex={-1}>
        <h2 id="compare-name">
          {nameOfSide(left)} <span className="compare-against">against</span> {nameOfSide(right)}
        </h2>
        <dl className="compare-sides">
          <SideWords where="left" side={left} />
          <SideWords where="right" side={right} />
        </dl>
        <div className="compare-ways">
          <button
            type="button"
            className="quiet-button"
            aria-pressed={isFlickering}
            title="One after the other in the same place (V)"
            onClick={toggleFlicker}
          >
            Let them take turns
          </button>
          {isFlickering && (
            <button type="button" className="quiet-button" onClick={turnOver}>
              Turn over
            </button>
          )}
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
        <button type="button" className="ink-button compare-end" title="Escape" onClick={endComparing}>
          Back to the easel
        </button>
      </section>
    </aside>
  );
}

function SideWords({ where, side }: { where: string; side: Comparison['left'] }) {
  const words = wordsOfSide(side);
  return (
    <div>
      <dt>{where}</dt>
      <dd>
        {nameOfSide(side)}
        {words && `, ${words}`}
      </dd>
    </div>
  );
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
