import { describe, expect, it } from 'vitest';
import {
  defaultParameters,
  type LengthParameter,
  parameterKeys,
  parameterTable,
} from '../../core/parameters/table.ts';
import { lengthToTrack, lengthTrackSteps, trackToLength } from '../../renderer/controls/trackScale.ts';
import { readValue, showValue } from '../../renderer/controls/valueText.ts';
import { strataKey } from '../../renderer/painting/strataKey.ts';

describe('typed values', () => {
  it('reads back what it shows, for every parameter at its default', () => {
    const values = defaultParameters();
    for (const key of parameterKeys) {
      if (parameterTable[key].kind === 'choice') continue;
      expect(readValue(key, showValue(key, values[key])), key).toBe(values[key]);
    }
  });

  it('takes what people write', () => {
    expect(readValue('body.strength', '45')).toBe(0.45);
    expect(readValue('body.strength', '45 %')).toBe(0.45);
    expect(readValue('body.brush', '4,5')).toBe('4.5mm');
    expect(readValue('body.brush', '12 ‰')).toBe('12permille');
    expect(readValue('body.noiseFloor', 'Auto')).toBe('auto');
  });

  it('refuses what has no meaning', () => {
    for (const text of ['', '140 %', 'much', '-3'])
      expect(() => readValue('body.strength', text), text).toThrow(/body\.strength/);
  });
});

describe('length track', () => {
  const brush = parameterTable['body.brush'] as LengthParameter;
  it('runs from the shortest to the longest, and comes back to where it was', () => {
    expect(trackToLength(brush, 0, '1mm')).toBe('0.1mm');
    expect(trackToLength(brush, lengthTrackSteps, '1mm')).toBe('60mm');
    for (const position of [80, 100, 140, 190])
      expect(
        Math.abs(lengthToTrack(brush, trackToLength(brush, position, '1mm')) - position),
      ).toBeLessThanOrEqual(1);
  });
});

describe('strata key', () => {
  it('changes with every parameter except those of the composition', () => {
    const base = defaultParameters();
    const composed = new Set([
      'ground.paper',
      'ground.colour',
      'body.strength',
      'line.strength',
      'line.blend',
      'line.colour',
      'relief.strength',
    ]);
    for (const key of parameterKeys) {
      const changed = { ...base, [key]: 'other' };
      expect(strataKey(changed, 300) === strataKey(base, 300), key).toBe(composed.has(key));
    }
    // The surface is only lit where it is to be seen.
    const lit = { ...base, 'relief.strength': 0.3 };
    expect(strataKey(lit, 300)).not.toBe(strataKey(base, 300));
    expect(strataKey({ ...lit, 'relief.strength': 0.6 }, 300)).toBe(strataKey(lit, 300));
    expect(strataKey(base, 420)).not.toBe(strataKey(base, 300));
  });
});
