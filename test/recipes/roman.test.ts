import { describe, expect, it } from 'vitest';
import { readStateNumber, toRoman } from '../../core/presets/roman.ts';

describe('Roman numerals', () => {
  // Years as they stand on buildings and in film credits, and the subtractive pairs of every handbook.
  it.each([
    [1, 'I'],
    [4, 'IV'],
    [9, 'IX'],
    [14, 'XIV'],
    [40, 'XL'],
    [90, 'XC'],
    [400, 'CD'],
    [900, 'CM'],
    [1776, 'MDCCLXXVI'],
    [1954, 'MCMLIV'],
    [1990, 'MCMXC'],
    [2014, 'MMXIV'],
    [3999, 'MMMCMXCIX'],
  ])('%i is %s', (number, roman) => {
    expect(toRoman(number)).toBe(roman);
    expect(readStateNumber(roman.toLowerCase())).toBe(number);
  });

  it('has a spelling of its own for every number, and reads it back', () => {
    const spellings = new Set<string>();
    for (let number = 1; number <= 5000; number++) {
      const roman = toRoman(number);
      expect(roman).toMatch(/^M*(CM|CD|D?C{0,3})(XC|XL|L?X{0,3})(IX|IV|V?I{0,3})$/);
      expect(readStateNumber(roman)).toBe(number);
      spellings.add(roman);
    }
    expect(spellings.size).toBe(5000);
  });

  it.each([[''], ['IIII'], ['IC'], ['VX'], ['0'], ['-1'], ['2.5'], ['heron']])('does not read %j', (text) => {
    expect(readStateNumber(text)).toBeNull();
  });

  it.each([[0], [-1], [1.5], [Number.NaN]])('refuses %d', (number) => {
    expect(() => toRoman(number)).toThrow(RangeError);
  });
});
