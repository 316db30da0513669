import { parseLength } from '../../core/parameters/parse.ts';
import type { LengthParameter, LengthText, LengthUnit } from '../../core/parameters/table.ts';

/** Positions of a length's track; equal steps are equal ratios, as brushes grow. */
export const lengthTrackSteps = 200;

/** Where a length stands on its track, 0…`lengthTrackSteps`. */
export function lengthToTrack(parameter: LengthParameter, text: LengthText): number {
  const length = parseLength(text)!;
  const { min, max } = boundsOf(parameter, length.unit);
  const fraction = Math.log(length.value / min) / Math.log(max / min);
  return Math.round(Math.min(1, Math.max(0, fraction)) * lengthTrackSteps);
}

/** The length at a track position, in the unit of `like`, on the parameter's own steps. */
export function trackToLength(parameter: LengthParameter, position: number, like: LengthText): LengthText {
  const { unit } = parseLength(like)!;
  const { min, max } = boundsOf(parameter, unit);
  const raw = min * (max / min) ** (position / lengthTrackSteps);
  const step = parameter.step[unit];
  const stepped = Math.round(raw / step) * step;
  const value = Math.min(max, Math.max(min, stepped));
  return `${Number(value.toPrecision(4))}${unit}`;
}

/** The next length by the parameter's step, for the arrow keys of a typed value. */
export function stepLength(parameter: LengthParameter, text: LengthText, steps: number): LengthText {
  const { value, unit } = parseLength(text)!;
  const next = value + steps * parameter.step[unit];
  const held = Math.min(parameter.max[unit], Math.max(parameter.min[unit], next));
  return `${Number(held.toPrecision(6))}${unit}`;
}

function boundsOf(parameter: LengthParameter, unit: LengthUnit): { min: number; max: number } {
  return { min: parameter.min[unit], max: parameter.max[unit] };
}
