import { describe, expect, it } from 'vitest';
import { defaultParameters, parameterKeys, parameterTable } from '../../core/parameters/table.ts';
import { differences, sentenceOfDifferences, showParameter } from '../../core/presets/differences.ts';

const base = defaultParameters();

describe('differences', () => {
  it('lists what differs, in the order of the parameter table', () => {
    const rows = differences(base, { ...base, 'line.width': '0.5mm', 'body.brush': '4.5mm' });
    expect(rows.map((row) => [row.label, row.beforeText, row.afterText])).toEqual([
      ['Brush', '3.2 mm', '4.5 mm'],
      [parameterTable['line.width'].label, '0.25 mm', '0.5 mm'],
    ]);
    expect(differences(base, { ...base })).toEqual([]);
  });

  it('says it in one sentence', () => {
    expect(sentenceOfDifferences(base, base)).toBe('Nothing changed.');
    expect(sentenceOfDifferences(base, { ...base, 'body.brush': '4.5mm', 'body.hold': 0.3 })).toBe(
      'Brush 3.2 mm → 4.5 mm, hold 0.25 → 0.3.',
    );
  });

  it('counts what would make the sentence too long, but never a single one', () => {
    const changed = { ...base, 'body.brush': '4.5mm', 'body.hold': 0.3, 'body.coats': 3 } as const;
    expect(sentenceOfDifferences(base, changed, 1)).toBe('Brush 3.2 mm → 4.5 mm, and 2 more.');
    expect(sentenceOfDifferences(base, changed, 2)).toBe(
      'Brush 3.2 mm → 4.5 mm, hold 0.25 → 0.3, coats 2 → 3.',
    );
  });

  it('names the stratum where two strata share a label', () => {
    expect(sentenceOfDifferences(base, { ...base, 'line.strength': 0.07, 'body.strength': 0.5 })).toBe(
      `Body strength 100 % → 50 %, line strength ${base['line.strength'] * 100} % → 7 %.`,
    );
  });

  it('shows every kind of value as people read it', () => {
    expect(showParameter('body.brush', '12permille')).toBe('12 ‰ of the long edge');
    expect(showParameter('body.brush', '64px')).toBe('64 px');
    expect(showParameter('body.noiseFloor', 'auto')).toBe('auto');
    expect(showParameter('body.method', 'grain-wise')).toBe('Grain-wise');
    expect(showParameter('line.colour', '#1c1a17')).toBe('#1c1a17');
  });

  it('has one label for each parameter', () => {
    const other = Object.fromEntries(parameterKeys.map((key) => [key, 'other'])) as unknown as typeof base;
    const labels = differences(base, other).map((row) => row.label);
    expect(labels).toHaveLength(parameterKeys.length);
    expect(new Set(labels).size).toBe(labels.length);
  });
});
