import {
  type LengthText,
  type Parameter,
  type ParameterKey,
  parameterKeys,
  parameterTable,
  type Stratum,
} from '../../core/parameters/table.ts';
import type { OpenedPhoto } from '../../main/host/api/hostCommands.ts';
import { useOutput } from '../app/outputWork.ts';
import { wholeLongEdgeMm } from '../print/printMeasures.ts';
import type { Look } from '../state/lookStore.ts';
import { ChoiceControl } from './ChoiceControl.tsx';
import { ColourControl } from './ColourControl.tsx';
import { LengthControl } from './LengthControl.tsx';
import { NumberControl } from './NumberControl.tsx';

/** Seldom needed: folded away under a heading of their own. */
const finerKeys: ReadonlySet<ParameterKey> = new Set<ParameterKey>([
  'body.method',
  'body.noiseFloor',
  'body.coats',
  'line.source',
  'line.blend',
]);

export const stratumSentence: Record<Stratum, string> = {
  ground: 'The photograph, and the paper that may cover it.',
  body: 'The paint: what the smoothing lays over the photograph.',
  line: 'The ink sketch that lies over the paint.',
  relief: 'The light on the surface of the paint.',
};

interface StratumControlsProps {
  stratum: Stratum;
  look: Look;
  photo: OpenedPhoto;
}

/** The controls of one stratum, made from the parameter table. */
export function StratumControls({ stratum, look, photo }: StratumControlsProps) {
  const keys = parameterKeys.filter((key) => parameterTable[key].stratum === stratum);
  const plain = keys.filter((key) => !finerKeys.has(key));
  const finer = keys.filter((key) => finerKeys.has(key));
  const control = (key: ParameterKey) => <Control key={key} parameterKey={key} look={look} photo={photo} />;
  return (
    <>
      <p className="panel-sentence">{stratumSentence[stratum]}</p>
      {plain.map(control)}
      {finer.length > 0 && (
        <details className="finer">
          <summary>Finer points</summary>
          {finer.map(control)}
        </details>
      )}
    </>
  );
}

interface ControlProps {
  parameterKey: ParameterKey;
  look: Look;
  photo: OpenedPhoto;
}

function Control({ parameterKey, look, photo }: ControlProps) {
  const parameter: Parameter = parameterTable[parameterKey];
  const output = useOutput();
  const value = look.parameters[parameterKey];
  const presetValue = look.presetParameters[parameterKey];
  switch (parameter.kind) {
    case 'number':
    case 'autoNumber':
      return (
        <NumberControl
          parameterKey={parameterKey}
          value={value as number | 'auto'}
          presetValue={presetValue as number | 'auto'}
          measured={parameterKey === 'body.noiseFloor' ? photo.noiseFloor : null}
        />
      );
    case 'length':
      return (
        <LengthControl
          parameterKey={parameterKey}
          value={value as LengthText}
          presetValue={presetValue as LengthText}
          longEdgePx={Math.max(photo.widthPx, photo.heightPx)}
          printLongEdgeMm={wholeLongEdgeMm(photo, output)}
        />
      );
    case 'choice':
      return (
        <ChoiceControl
          parameterKey={parameterKey}
          value={value as string}
          presetValue={presetValue as string}
        />
      );
    case 'colour':
      return (
        <ColourControl
          parameterKey={parameterKey}
          value={value as string}
          presetValue={presetValue as string}
        />
      );
  }
}
