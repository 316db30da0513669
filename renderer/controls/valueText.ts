import { lengthToPx } from '../../core/parameters/lengths.ts';
import { parseLength, parseParameter } from '../../core/parameters/parse.ts';
import {
  type LengthText,
  type Parameter,
  type ParameterKey,
  type Parameters,
  parameterTable,
} from '../../core/parameters/table.ts';

const thin = '\u202f';

/** A value as it is shown beside its control. */
export function showValue(key: ParameterKey, value: string | number, measured: number | null = null): string {
  const parameter: Parameter = parameterTable[key];
  switch (parameter.kind) {
    case 'number':
      if (parameter.unit === 'percent') return `${Math.round((value as number) * 100)}${thin}%`;
      if (parameter.unit === 'degrees') return `${value}°`;
      return plainNumber(value as number, parameter.step);
    case 'autoNumber':
      if (value === 'auto') return measured === null ? 'auto' : `auto, ${measured.toFixed(3)}`;
      return plainNumber(value as number, parameter.step);
    case 'length': {
      const length = parseLength(value as string)!;
      return `${length.value}${thin}${length.unit === 'permille' ? '‰' : length.unit}`;
    }
    case 'choice':
      return parameter.choices.find((choice) => choice.value === value)?.label ?? String(value);
    case 'colour':
      return String(value);
  }
}

function plainNumber(value: number, step: number): string {
  const decimals = Math.max(0, Math.ceil(-Math.log10(step) - 1e-9));
  return value.toFixed(decimals);
}

/**
 * Reads what was typed for a parameter: percent with or without the sign, a length with or without its unit
 * (millimetres when it has none), ‰ for permille.
 * @throws ParameterError where the value cannot be used
 */
export function readValue<K extends ParameterKey>(key: K, typed: string): Parameters[K] {
  const parameter: Parameter = parameterTable[key];
  const text = typed
    .replaceAll(/[\s\u202f]/g, '')
    .replace(',', '.')
    .toLowerCase();
  if (parameter.kind === 'number' && parameter.unit === 'percent') {
    const percent = Number(text.replace('%', ''));
    return parseParameter(key, text === '' ? Number.NaN : percent / 100);
  }
  if (parameter.kind === 'number' && parameter.unit === 'degrees')
    return parseParameter(key, text.replace('°', ''));
  if (parameter.kind === 'length') {
    const spelt = text.replace('‰', 'permille');
    return parseParameter(key, /^[\d.]+$/.test(spelt) ? `${spelt}mm` : spelt);
  }
  if (parameter.kind === 'autoNumber' && text.startsWith('auto')) return parseParameter(key, 'auto');
  return parseParameter(key, text);
}

/** A length on the print in millimetres, whatever unit it is written in. */
export function lengthInMm(text: LengthText, longEdgePx: number, printLongEdgeMm: number): number {
  const px = lengthToPx(text, { longEdgePx, printLongEdgeMm });
  return (px * printLongEdgeMm) / longEdgePx;
}
