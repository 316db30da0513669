import { presetBinStore, restorePreset } from '../app/presetWork.ts';
import { useStore } from '../state/store.ts';

/** Presets that were put away; they can always be taken back. */
export function PresetBin() {
  const bin = useStore(presetBinStore);
  if (bin.length === 0) return null;
  return (
    <details className="preset-bin">
      <summary>In the bin: {bin.length}</summary>
      <ul>
        {bin.map(({ binId, title, states }) => (
          <li key={binId}>
            <span>
              {title}, {states === 1 ? 'one state' : `${states} states`}
            </span>
            <button type="button" className="plain-button" onClick={() => void restorePreset(binId)}>
              Take back<span className="unseen"> {title}</span>
            </button>
          </li>
        ))}
      </ul>
    </details>
  );
}
