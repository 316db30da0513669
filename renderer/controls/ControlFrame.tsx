import type { ReactNode } from 'react';
import type { ParameterKey } from '../../core/parameters/table.ts';
import { parameterTable } from '../../core/parameters/table.ts';
import { resetParameter } from '../state/lookStore.ts';
import { PlainControl } from './PlainControl.tsx';

interface ControlFrameProps {
  parameterKey: ParameterKey;
  isChanged: boolean;
  helpId: string;
  value?: ReactNode;
  help?: string;
  children: ReactNode;
}

/** The control of a parameter. */
export function ControlFrame({ parameterKey, isChanged, helpId, value, help, children }: ControlFrameProps) {
  const parameter = parameterTable[parameterKey];
  return (
    <PlainControl
      name={parameter.label}
      value={value}
      help={help ?? parameter.help}
      helpId={helpId}
      dataKey={parameterKey}
      reset={
        isChanged && (
          <button
            type="button"
            className="control-reset"
            title="Back to the preset’s value"
            onClick={() => resetParameter(parameterKey)}
          >
            reset<span className="unseen"> {parameter.label.toLowerCase()} to the preset’s value</span>
          </button>
        )
      }
    >
      {children}
    </PlainControl>
  );
}
