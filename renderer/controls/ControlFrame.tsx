import type { ReactNode } from 'react';
import type { ParameterKey } from '../../core/parameters/table.ts';
import { parameterTable } from '../../core/parameters/table.ts';
import { resetParameter } from '../state/lookStore.ts';

interface ControlFrameProps {
  parameterKey: ParameterKey;
  isChanged: boolean;
  helpId: string;
  value?: ReactNode;
  help?: string;
  children: ReactNode;
}

/** Name and value on one line, the control beneath, and a sentence that says what it does. */
export function ControlFrame({ parameterKey, isChanged, helpId, value, help, children }: ControlFrameProps) {
  const parameter = parameterTable[parameterKey];
  return (
    <div className="control" data-key={parameterKey}>
      <div className="control-head">
        <span className="control-name">{parameter.label}</span>
        {isChanged && (
          <button
            type="button"
            className="control-reset"
            title="Back to the preset’s value"
            onClick={() => resetParameter(parameterKey)}
          >
            reset<span className="unseen"> {parameter.label.toLowerCase()} to the preset’s value</span>
          </button>
        )}
        <span className="control-value">{value}</span>
      </div>
      {children}
      <p className="control-help" id={helpId}>
        {help ?? parameter.help}
      </p>
    </div>
  );
}
