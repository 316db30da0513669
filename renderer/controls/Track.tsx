import { useRef } from 'react';
import type { ChangeGroup } from '../state/undoHistory.ts';
import { startDragGroup } from './dragGroup.ts';

interface TrackProps {
  label: string;
  min: number;
  max: number;
  step: number;
  value: number;
  /** The preset's value: a tick on the track. */
  mark: number | null;
  valueText: string;
  describedBy?: string;
  onChange: (value: number, group: ChangeGroup) => void;
  onReset: () => void;
}

/** A line with a grip: drag it, or use the arrow keys; a double click goes back to the preset's value. */
export function Track(props: TrackProps) {
  const { label, min, max, step, value, mark, valueText, describedBy, onChange, onReset } = props;
  const drag = useRef<ChangeGroup | null>(null);
  const fraction = (position: number) => (position - min) / (max - min);
  return (
    <div className="track">
      {mark !== null && (
        <span
          className="track-mark"
          style={{ '--at': fraction(mark) } as React.CSSProperties}
          aria-hidden="true"
        />
      )}
      <input
        className="track-input"
        type="range"
        aria-label={label}
        aria-valuetext={valueText}
        aria-describedby={describedBy}
        min={min}
        max={max}
        step={step}
        value={value}
        onPointerDown={() => {
          drag.current = startDragGroup(label);
        }}
        onPointerUp={() => {
          drag.current = null;
        }}
        onChange={(event) =>
          onChange(Number(event.target.value), drag.current ?? { name: label, held: false })
        }
        onDoubleClick={onReset}
        onKeyDown={(event) => {
          if (event.key === 'Delete' || event.key === 'Backspace') onReset();
        }}
      />
    </div>
  );
}
