import { useId } from 'react';
import { type ChoiceParameter, type ParameterKey, parameterTable } from '../../core/parameters/table.ts';
import { setParameter } from '../state/lookStore.ts';
import { ControlFrame } from './ControlFrame.tsx';
import { FewChoices } from './FewChoices.tsx';

interface ChoiceControlProps {
  parameterKey: ParameterKey;
  value: string;
  presetValue: string;
}

/** Few choices stand side by side; more go into a list. */
const fewChoices = 3;

export function ChoiceControl({ parameterKey, value, presetValue }: ChoiceControlProps) {
  const parameter = parameterTable[parameterKey] as unknown as ChoiceParameter;
  const helpId = useId();
  const chosen = parameter.choices.find((choice) => choice.value === value);
  const set = (next: string) => setParameter(parameterKey, next as never, null);
  return (
    <ControlFrame
      parameterKey={parameterKey}
      isChanged={value !== presetValue}
      helpId={helpId}
      help={chosen?.help}
    >
      {parameter.choices.length <= fewChoices ? (
        <FewChoices
          legend={parameter.label}
          name={parameterKey}
          choices={parameter.choices}
          value={value}
          describedBy={helpId}
          onChoose={set}
        />
      ) : (
        <select
          className="choice"
          aria-label={parameter.label}
          aria-describedby={helpId}
          value={value}
          onChange={(event) => set(event.target.value)}
        >
          {parameter.choices.map((choice) => (
            <option key={choice.value} value={choice.value}>
              {choice.value === presetValue ? `${choice.label} (preset)` : choice.label}
            </option>
          ))}
        </select>
      )}
    </ControlFrame>
  );
}
