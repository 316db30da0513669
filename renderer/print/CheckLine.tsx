import { useId } from 'react';

interface CheckLineProps {
  label: string;
  help: string;
  isChecked: boolean;
  onChange: (isChecked: boolean) => void;
}

/** Something that is done or not. */
export function CheckLine({ label, help, isChecked, onChange }: CheckLineProps) {
  const helpId = useId();
  return (
    <div className="control">
      <label className="check-line">
        <input
          type="checkbox"
          checked={isChecked}
          aria-describedby={helpId}
          onChange={(event) => onChange(event.target.checked)}
        />
        <span className="control-name">{label}</span>
      </label>
      <p className="control-help" id={helpId}>
        {help}
      </p>
    </div>
  );
}
