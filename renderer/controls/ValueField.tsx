import { type KeyboardEvent, useId, useState } from 'react';

interface ValueFieldProps {
  label: string;
  shown: string;
  /** Takes what was typed; returns what is wrong with it, or null. */
  onTyped: (text: string) => string | null;
  /** Arrow keys, where the value has steps. */
  onStep?: (steps: number) => void;
  describedBy?: string;
}

/** A value that is read like text and can be typed over. */
export function ValueField({ label, shown, onTyped, onStep, describedBy }: ValueFieldProps) {
  const [typed, setTyped] = useState<string | null>(null);
  const [fault, setFault] = useState<string | null>(null);
  const faultId = useId();

  const leave = () => {
    setTyped(null);
    setFault(null);
  };
  const commit = (): boolean => {
    if (typed === null || typed === shown) {
      leave();
      return true;
    }
    const problem = onTyped(typed);
    if (problem === null) leave();
    else setFault(problem);
    return problem === null;
  };
  const onKeyDown = (event: KeyboardEvent<HTMLInputElement>) => {
    event.stopPropagation();
    if (event.key === 'Enter') {
      if (commit()) event.currentTarget.select();
    } else if (event.key === 'Escape') {
      leave();
      event.preventDefault();
    } else if (onStep && (event.key === 'ArrowUp' || event.key === 'ArrowDown')) {
      leave();
      onStep((event.key === 'ArrowUp' ? 1 : -1) * (event.shiftKey ? 10 : 1));
      event.preventDefault();
    } else if (event.ctrlKey || event.metaKey) {
      // Undo inside the field belongs to the field while something is typed, else to the picture.
      if (typed === null) leave();
    }
  };
  const text = typed ?? shown;
  return (
    <span className="value">
      <input
        className="value-input"
        type="text"
        aria-label={label}
        aria-invalid={fault !== null}
        aria-describedby={fault ? faultId : describedBy}
        value={text}
        size={Math.max(3, text.length)}
        spellCheck={false}
        autoComplete="off"
        onChange={(event) => setTyped(event.target.value)}
        onFocus={(event) => event.target.select()}
        onBlur={() => {
          if (fault !== null) leave();
          else if (!commit()) return;
        }}
        onKeyDown={onKeyDown}
      />
      {fault && (
        <span className="value-fault" id={faultId} role="alert">
          {fault}
        </span>
      )}
    </span>
  );
}
