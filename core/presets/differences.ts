import { parseLength } from '../parameters/parse.ts';
import {
  type Parameter,
  type ParameterKey,
  type Parameters,
  parameterKeys,
  parameterTable,
  type Stratum,
} from '../parameters/table.ts';

/** One row of the comparison of two states. */
export interface Difference {
  key: ParameterKey;
  stratum: Stratum;
  /** In painters' words; names the stratum where the label alone would not tell. */
  label: string;
  before: Parameters[ParameterKey];
  after: Parameters[ParameterKey];
  beforeText: string;
  afterText: string;
}

/**
 * The table of differences between two sets of parameters.
 * @param before full; not modified
 * @param after full; not modified
 * @returns one row for each parameter that differs, in the order of the parameter table
 */
export function differences(before: Parameters, after: Parameters): Difference[] {
  return parameterKeys
    .filter((key) => before[key] !== after[key])
    .map((key) => ({
      key,
      stratum: parameterTable[key].stratum,
      label: clearLabel(key),
      before: before[key],
      after: after[key],
      beforeText: showParameter(key, before[key]),
      afterText: showParameter(key, after[key]),
    }));
}

/** Parameters told of in a sentence before the rest is only counted. */
const mostTold = 4;

/**
 * One sentence that says what changed.
 * @param most how many changes are told before the rest is counted
 * @returns such as `Brush 3.2 mm → 4.5 mm, hold 0.25 → 0.3.`
 */
export function sentenceOfDifferences(before: Parameters, after: Parameters, most = mostTold): string {
  const rows = differences(before, after);
  if (rows.length === 0) return 'Nothing changed.';
  const told = rows.length === most + 1 ? rows : rows.slice(0, most);
  const parts = told.map((row) => `${lowerFirst(row.label)} ${row.beforeText} → ${row.afterText}`);
  const rest = rows.length - told.length;
  if (rest > 0) parts.push(`and ${rest} more`);
  return `${upperFirst(parts.join(', '))}.`;
}

/**
 * A value as people read it.
 * @param key of the parameter table
 * @param value a checked value
 * @returns such as `4.5 mm`, `80 %`, `135°`, `Multi-scale` or `auto`
 */
export function showParameter(key: ParameterKey, value: Parameters[ParameterKey]): string {
  const parameter: Parameter = parameterTable[key];
  switch (parameter.kind) {
    case 'number':
      return showNumber(Number(value), parameter.unit);
    case 'autoNumber':
      return String(value);
    case 'length': {
      const length = parseLength(String(value));
      if (!length) return String(value);
      return `${length.value} ${length.unit === 'permille' ? '‰ of the long edge' : length.unit}`;
    }
    case 'choice':
      return parameter.choices.find((choice) => choice.value === value)?.label ?? String(value);
    case 'colour':
      return String(value);
  }
}

function showNumber(value: number, unit: 'none' | 'percent' | 'degrees'): string {
  if (unit === 'degrees') return `${value}°`;
  // Twelve digits: enough for every step of the table, few enough to hide 0.07 · 100 = 7.000000000000001.
  return unit === 'percent' ? `${Number((value * 100).toPrecision(12))} %` : String(value);
}

/** The label, with its stratum before it where another stratum has a parameter of the same label. */
function clearLabel(key: ParameterKey): string {
  const { label, stratum } = parameterTable[key];
  const isShared = parameterKeys.some((other) => other !== key && parameterTable[other].label === label);
  return isShared ? `${upperFirst(stratum)} ${lowerFirst(label)}` : label;
}

function upperFirst(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

function lowerFirst(text: string): string {
  return text.charAt(0).toLowerCase() + text.slice(1);
}
