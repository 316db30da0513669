import type { PhotoMemory } from '../../main/host/api/memoryCommands.ts';
import { keepBoth, repaintWithEngine } from '../app/memoryWork.ts';

/** Says how the recipe is kept, where that is not as usual, and what can be done. */
export function MemorySign({ memory }: { memory: PhotoMemory }) {
  const { saved, access, olderEngine, photo } = memory;
  if (saved.kind === 'conflict')
    return (
      <p className="memory-sign is-trouble" role="alert" title={saved.message}>
        Not saved: this recipe was changed elsewhere.
        <button type="button" className="plain-button" onClick={() => void keepBoth()}>
          Keep both
        </button>
      </p>
    );
  if (saved.kind === 'failed')
    return (
      <p className="memory-sign is-trouble" role="alert" title={saved.message}>
        Not saved beside the photograph; your work is safe.
      </p>
    );
  if (access === 'readOnly')
    return (
      <p className="memory-sign" title={memory.remarks.join(' ')}>
        Only for looking: a newer Oxgall wrote this recipe.
      </p>
    );
  if (olderEngine)
    return (
      <p className="memory-sign">
        Kept by engine {olderEngine.keptBy}; today’s is {olderEngine.today}.
        <button type="button" className="plain-button" onClick={() => void repaintWithEngine()}>
          Repaint with today’s engine
        </button>
      </p>
    );
  if (photo === 'changed') return <p className="memory-sign">The photograph has changed since.</p>;
  if (access === 'mirrored')
    return (
      <p className="memory-sign" title={memory.recipePath}>
        The recipe lies elsewhere: this folder cannot be written.
      </p>
    );
  return null;
}
