import { useId } from 'react';
import { PlainControl } from '../controls/PlainControl.tsx';

interface ListChoiceProps<Value extends string> {
  name: string;
  choices: readonly { value: Value; label: string; help: string }[];
  value: Value;
  onChoose: (value: Value) => void;
}

/** One of several, in a list; its sentence beneath. */
export function ListChoice<Value extends string>({ name, choices, value, onChoose }: ListChoiceProps<Value>) {
  const helpId = useId();
  return (
    <PlainControl name={name} help={choices.find((choice) => choice.value === value)?.help} helpId={helpId}>
      <select
        className="choice"
        aria-label={name}
        aria-describedby={helpId}
        value={value}
        onChange={(event) => onChoose(event.target.value as Value)}
      >
        {choices.map((choice) => (
          <option key={choice.value} value={choice.value}>
            {choice.label}
          </option>
        ))}
      </select>
    </PlainControl>
  );
}
