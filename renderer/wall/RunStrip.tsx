import type { RunView } from '../../main/host/api/runCommands.ts';
import { useStore } from '../state/store.ts';
import { framesAtHand } from './choosing.ts';
import { endInWords, paintFirst, runStore, stepRun } from './runWork.ts';
import { chosenStore } from './wallStore.ts';

/** How far the run is, and what can be done about it; at the foot of the Wall. */
export function RunStrip() {
  const run = useStore(runStore);
  const chosen = useStore(chosenStore, ({ frameIds }) => frameIds.size);
  if (!run) return null;
  const isOn = run.state === 'running' || run.state === 'paused';
  const failures = Object.entries(run.frames).filter(([, { state }]) => state === 'failed');
  return (
    <section className="run-strip" aria-label="The run">
      {isOn && <progress max={1} value={run.fraction01} aria-label="Painting the series" />}
      <p className="run-words" role="status">
        {isOn ? progressInWords(run) : endInWords(run)} <span className="run-where">{run.outFolder}</span>
      </p>
      {failures.length > 0 && (
        <details>
          <summary>{failures.length === 1 ? 'One failed' : `${failures.length} failed`}</summary>
          <ul>
            {failures.map(([frameId, { message }]) => (
              <li key={frameId}>
                {frameId}: {message}
              </li>
            ))}
          </ul>
        </details>
      )}
      {isOn && (
        <>
          {chosen > 0 && (
            <button
              type="button"
              className="plain-button"
              title="The chosen frames come next"
              onClick={() => void paintFirst(framesAtHand())}
            >
              Paint these first
            </button>
          )}
          <button
            type="button"
            className="plain-button"
            onClick={() => void stepRun(run.state === 'paused' ? 'resumeRun' : 'pauseRun')}
          >
            {run.state === 'paused' ? 'Go on' : 'Pause'}
          </button>
          <button type="button" className="plain-button" onClick={() => void stepRun('cancelRun')}>
            Stop
          </button>
        </>
      )}
      {!isOn && (
        <button type="button" className="plain-button" onClick={() => runStore.set(null)}>
          Put away
        </button>
      )}
    </section>
  );
}

function progressInWords({ state, done, total, leftMs }: RunView): string {
  const words = `${done} of ${total} painted`;
  if (state === 'paused') return `${words}, paused.`;
  return leftMs === null ? `${words}.` : `${words}, ${timeInWords(leftMs)} left.`;
}

export function timeInWords(ms: number): string {
  const seconds = Math.max(1, Math.round(ms / 1000));
  if (seconds < 90) return `about ${seconds} s`;
  const minutes = Math.round(seconds / 60);
  return minutes < 90
    ? `about ${minutes} minutes`
    : `about ${Math.floor(minutes / 60)} h ${minutes % 60} min`;
}
