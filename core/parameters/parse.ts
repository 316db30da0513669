import { ParameterError } from './parameterError.ts';
import {
  defaultParameters,
  type LengthParameter,
  type LengthText,
  type LengthUnit,
  type Parameter,
  type ParameterKey,
  type Parameters,
  parameterKeys,
  parameterTable,
} from './table.ts';

const lengthPattern = /^\s*(\d+(?:\.\d+)?|\.\d+)\s*(mm|px|permille)\s*$/;
const colourPattern = /^#[0-9a-f]{6}$/i;

/** Whether `text` names a parameter. */
export function isParameterKey(text: string): text is ParameterKey {
  return Object.hasOwn(parameterTable, text);
}

/**
 * Takes a length apart.
 * @param text such as `4.5mm`, `64px` or `12permille`
 * @returns the number and its unit, or null where `text` is no length
 */
export function parseLength(text: string): { value: number; unit: LengthUnit } | null {
  const match = lengthPattern.exec(text);
  return match ? { value: Number(match[1]), unit: match[2] as LengthUnit } : null;
}

/** What a parameter takes, in words: for help and for errors. */
export function describeRange(parameter: Parameter): string {
  switch (parameter.kind) {
    case 'number':
      return `a ${parameter.whole ? 'whole ' : ''}number from ${parameter.min} to ${parameter.max}`;
    case 'autoNumber':
      return `auto or a number from ${parameter.min} to ${parameter.max}`;
    case 'length':
      return `a length with its unit (${(['mm', 'px', 'permille'] as const)
        .map((unit) => `${parameter.min[unit]}${unit} to ${parameter.max[unit]}${unit}`)
        .join(', ')})`;
    case 'choice':
      return `one of ${parameter.choices.map((choice) => choice.value).join(', ')}`;
    case 'colour':
      return 'a colour written #rrggbb';
  }
}

/**
 * Checks one value against the table; numbers may come as text.
 * @param key the parameter's key, as written
 * @param value a number, a text, or anything else (refused)
 * @returns the value in its stored form
 * @throws ParameterError where the key is unknown or the value outside its range
 */
export function parseParameter<K extends ParameterKey>(key: K, value: unknown): Parameters[K];
export function parseParameter(key: string, value: unknown): Parameters[ParameterKey];
export function parseParameter(key: string, value: unknown): Parameters[ParameterKey] {
  if (!isParameterKey(key))
    throw new ParameterError(key, `one of the keys ${parameterKeys.join(', ')}`, value);
  const parameter: Parameter = parameterTable[key];
  const refuse = (): never => {
    throw new ParameterError(key, describeRange(parameter), value);
  };
  switch (parameter.kind) {
    case 'number':
      return readNumber(value, parameter.min, parameter.max, parameter.whole ?? false) ?? refuse();
    case 'autoNumber':
      if (value === 'auto') return 'auto';
      return readNumber(value, parameter.min, parameter.max, false) ?? refuse();
    case 'length':
      return readLength(value, parameter) ?? refuse();
    case 'choice': {
      const found = parameter.choices.find((choice) => choice.value === value);
      return (found?.value as Parameters[ParameterKey] | undefined) ?? refuse();
    }
    case 'colour':
      return typeof value === 'string' && colourPattern.test(value) ? value.toLowerCase() : refuse();
  }
}

/**
 * Lays checked values over a base.
 * @param values key → value; unknown keys are refused
 * @param base what stands where `values` says nothing; the table's defaults unless given; not modified
 * @throws ParameterError for the first value that cannot be used
 */
export function parseParameters(
  values: Record<string, unknown>,
  base: Parameters = defaultParameters(),
): Parameters {
  const checked = Object.entries(values).map(([key, value]) => [key, parseParameter(key, value)]);
  return { ...base, ...Object.fromEntries(checked) };
}

function readNumber(value: unknown, min: number, max: number, whole: boolean): number | null {
  const isText = typeof value === 'string' && value.trim() !== '';
  const number = typeof value === 'number' ? value : isText ? Number(value) : Number.NaN;
  if (!Number.isFinite(number) || number < min || number > max) return null;
  if (whole && !Number.isInteger(number)) return null;
  return Object.is(number, -0) ? 0 : number;
}

function readLength(value: unknown, parameter: LengthParameter): LengthText | null {
  const length = typeof value === 'string' ? parseLength(value) : null;
  if (!length) return null;
  const { value: number, unit } = length;
  if (number < parameter.min[unit] || number > parameter.max[unit]) return null;
  return `${number}${unit}`;
}
