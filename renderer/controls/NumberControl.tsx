import { useId } from 'react';
import { ParameterError } from '../../core/parameters/parameterError.ts';
import { describeRange } from '../../core/parameters/parse.ts';
import {
  type AutoNumberParameter,
  type NumberParameter,
  type ParameterKey,
  parameterTable,
} from '../../core/parameters/table.ts';
import { resetParameter, setParameter } from '../state/lookStore.ts';
import type { ChangeGroup } from '../state/undoHistory.ts';
import { ControlFrame } from './ControlFrame.tsx';
import { Track } from './Track.tsx';
import { ValueField } from './ValueField.tsx';
import { readValue, showValue } from './valueText.ts';

interface NumberControlProps {
  parameterKey: ParameterKey;
  value: number | 'auto';
  presetValue: number | 'auto';
  /** What `auto` stands for on this photo, where it is known. */
  measured: number | null;
}

export function NumberControl({ parameterKey, value, presetValue, measured }: NumberControlProps) {
  const parameter = parameterTable[parameterKey] as NumberParameter | AutoNumberParameter;
  const helpId = useId();
  const place = (shown: number | 'auto') => (shown === 'auto' ? (measured ?? parameter.min) : shown);
  const set = (next: number | 'auto', group?: ChangeGroup | null) =>
    setParameter(parameterKey, next as never, group);
  const shown = showValue(parameterKey, value, measured);
  return (
    <ControlFrame
      parameterKey={parameterKey}
      isChanged={value !== presetValue}
      helpId={helpId}
      value={
        <ValueField
          label={`${parameter.label}, typed`}
          shown={shown}
          describedBy={helpId}
          onTyped={(text) => typeValue(parameterKey, text)}
          onStep={(steps) => set(stepNumber(parameter, place(value), steps))}
        />
      }
    >
      <Track
        label={parameter.label}
        min={parameter.min}
        max={parameter.max}
        step={parameter.step}
        value={place(value)}
        mark={presetValue === 'auto' && measured === null ? null : place(presetValue)}
        valueText={shown}
        describedBy={helpId}
        onChange={(next, group) => set(next, group)}
        onReset={() => resetParameter(parameterKey)}
      />
    </ControlFrame>
  );
}

function stepNumber(parameter: NumberParameter | AutoNumberParameter, value: number, steps: number): number {
  const next = Math.round((value + steps * parameter.step) / parameter.step) * parameter.step;
  return Number(Math.min(parameter.max, Math.max(parameter.min, next)).toFixed(6));
}

/** Sets what was typed, or says in plain words what would have been right. */
export function typeValue(key: ParameterKey, text: string): string | null {
  try {
    setParameter(key, readValue(key, text) as never, null);
    return null;
  } catch (error) {
    if (error instanceof ParameterError) return `Takes ${rangeInWords(key)}.`;
    throw error;
  }
}

function rangeInWords(key: ParameterKey): string {
  const parameter = parameterTable[key];
  if (parameter.kind === 'number' && parameter.unit === 'percent')
    return `${parameter.min * 100} to ${parameter.max * 100} %`;
  if (parameter.kind === 'length')
    return `${parameter.min.mm} to ${parameter.max.mm} mm, ${parameter.min.px} to ${parameter.max.px} px, or ${parameter.min.permille} to ${parameter.max.permille} ‰`;
  return describeRange(parameter);
}
