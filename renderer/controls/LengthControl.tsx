import { useId } from 'react';
import { lengthToPx } from '../../core/parameters/lengths.ts';
import {
  type LengthParameter,
  type LengthText,
  type ParameterKey,
  parameterTable,
} from '../../core/parameters/table.ts';
import { resetParameter, setParameter } from '../state/lookStore.ts';
import { BrushChooser } from './BrushChooser.tsx';
import { ControlFrame } from './ControlFrame.tsx';
import { typeValue } from './NumberControl.tsx';
import { Track } from './Track.tsx';
import { lengthToTrack, lengthTrackSteps, stepLength, trackToLength } from './trackScale.ts';
import { ValueField } from './ValueField.tsx';
import { lengthInMm, showValue } from './valueText.ts';

interface LengthControlProps {
  parameterKey: ParameterKey;
  value: LengthText;
  presetValue: LengthText;
  /** Of the whole photo, in pixels and at the scale of its print. */
  longEdgePx: number;
  printLongEdgeMm: number;
}

export function LengthControl(props: LengthControlProps) {
  const { parameterKey, value, presetValue, longEdgePx, printLongEdgeMm } = props;
  const parameter = parameterTable[parameterKey] as LengthParameter;
  const helpId = useId();
  const shown = showValue(parameterKey, value);
  const px = lengthToPx(value, { longEdgePx, printLongEdgeMm });
  const onPhoto = `${px < 10 ? px.toFixed(1) : Math.round(px)} px on this photograph`;
  const isBrush = parameterKey === 'body.brush';
  return (
    <ControlFrame
      parameterKey={parameterKey}
      isChanged={value !== presetValue}
      helpId={helpId}
      help={isBrush ? `${parameter.help} Drawn at print size; ${onPhoto}.` : `${parameter.help} ${onPhoto}.`}
      value={
        <ValueField
          label={`${parameter.label}, typed`}
          shown={shown}
          describedBy={helpId}
          onTyped={(text) => typeValue(parameterKey, text)}
          onStep={(steps) => setParameter(parameterKey, stepLength(parameter, value, steps) as never)}
        />
      }
    >
      {isBrush && <BrushChooser valueMm={lengthInMm(value, longEdgePx, printLongEdgeMm)} />}
      <Track
        label={parameter.label}
        min={0}
        max={lengthTrackSteps}
        step={1}
        value={lengthToTrack(parameter, value)}
        mark={lengthToTrack(parameter, presetValue)}
        valueText={`${shown}, ${onPhoto}`}
        describedBy={helpId}
        onChange={(position, group) =>
          setParameter(parameterKey, trackToLength(parameter, position, value) as never, group)
        }
        onReset={() => resetParameter(parameterKey)}
      />
    </ControlFrame>
  );
}
