import { useId } from 'react';
import { type ParameterKey, parameterTable } from '../../core/parameters/table.ts';
import { setParameter } from '../state/lookStore.ts';
import { ControlFrame } from './ControlFrame.tsx';
import { typeValue } from './NumberControl.tsx';
import { ValueField } from './ValueField.tsx';

/** Inks and papers of the trade to start from. */
const wells: Partial<Record<ParameterKey, readonly { name: string; colour: string }[]>> = {
  'line.colour': [
    { name: 'Lamp black', colour: '#1c1a17' },
    { name: 'Bistre', colour: '#4a3220' },
    { name: 'Indigo', colour: '#23304f' },
    { name: 'Sanguine', colour: '#8a3b24' },
    { name: 'Bottle green', colour: '#1f4034' },
    { name: 'Chalk', colour: '#f4f1ea' },
  ],
  'ground.colour': [
    { name: 'Warm white', colour: '#f6f1e6' },
    { name: 'Cold white', colour: '#f2f4f5' },
    { name: 'Cream', colour: '#efe3c8' },
    { name: 'Grey', colour: '#c9c7c2' },
    { name: 'Straw board', colour: '#cfae7d' },
    { name: 'Slate', colour: '#3b3f45' },
  ],
};

interface ColourControlProps {
  parameterKey: ParameterKey;
  value: string;
  presetValue: string;
}

export function ColourControl({ parameterKey, value, presetValue }: ColourControlProps) {
  const parameter = parameterTable[parameterKey];
  const helpId = useId();
  return (
    <ControlFrame
      parameterKey={parameterKey}
      isChanged={value !== presetValue}
      helpId={helpId}
      value={
        <ValueField
          label={`${parameter.label}, typed`}
          shown={value}
          describedBy={helpId}
          onTyped={(text) => typeValue(parameterKey, text.startsWith('#') ? text : `#${text}`)}
        />
      }
    >
      <div className="wells">
        <fieldset className="wells-row">
          <legend className="unseen">{parameter.label}, ready mixed</legend>
          {(wells[parameterKey] ?? []).map((well) => (
            <label key={well.colour} className="well" title={well.name}>
              <input
                className="unseen"
                type="radio"
                name={parameterKey}
                value={well.colour}
                checked={well.colour === value}
                onChange={() => setParameter(parameterKey, well.colour as never, null)}
              />
              <span className="well-paint" style={{ background: well.colour }} aria-hidden="true" />
              <span className="unseen">{well.name}</span>
            </label>
          ))}
        </fieldset>
        <label className="mix">
          <span>Mix</span>
          <input
            type="color"
            aria-label={`${parameter.label}, mixed`}
            value={value}
            onChange={(event) => setParameter(parameterKey, event.target.value as never)}
          />
        </label>
      </div>
    </ControlFrame>
  );
}
