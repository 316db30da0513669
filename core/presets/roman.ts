const numerals: readonly (readonly [string, number])[] = [
  ['M', 1000],
  ['CM', 900],
  ['D', 500],
  ['CD', 400],
  ['C', 100],
  ['XC', 90],
  ['L', 50],
  ['XL', 40],
  ['X', 10],
  ['IX', 9],
  ['V', 5],
  ['IV', 4],
  ['I', 1],
];

/**
 * A state's number as it is written on a print.
 * @param number a whole number from 1; from 4000 on the M is simply repeated
 * @throws RangeError for anything else
 */
export function toRoman(number: number): string {
  if (!Number.isInteger(number) || number < 1)
    throw new RangeError(`Expected a whole number from 1 for a state, received ${number}`);
  let rest = number;
  let text = '';
  for (const [letters, value] of numerals) {
    text += letters.repeat(Math.floor(rest / value));
    rest %= value;
  }
  return text;
}

/**
 * Reads a state's number, Roman or Arabic.
 * @param text such as `IV`, `iv` or `4`
 * @returns the number, or null where `text` is none; only the spelling of `toRoman` counts (`IIII` is none)
 */
export function readStateNumber(text: string): number | null {
  const trimmed = text.trim();
  if (/^[1-9]\d*$/.test(trimmed)) return Number(trimmed);
  const letters = trimmed.toUpperCase();
  let rest = letters;
  let number = 0;
  for (const [numeral, value] of numerals) {
    while (rest.startsWith(numeral)) {
      number += value;
      rest = rest.slice(numeral.length);
    }
  }
  return rest === '' && number > 0 && toRoman(number) === letters ? number : null;
}
