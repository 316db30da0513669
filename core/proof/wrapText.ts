import type { TypeMeasure, TypeStyle } from './proofPage.ts';

const ellipsis = '…';

/** Where a line of a file's name may end, beside spaces: behind these. Not behind a dot: an extension stays on. */
const breakBehind = /[\s\-_/,;:·)]/;
/** A dot between two figures is not needed where the line ends. */
const looseEnd = /[\s·]+$/;

/**
 * Breaks a text into lines.
 * @param atMost lines; what is left over is taken from the middle of the last one, so that the end of a file's
 *   name, its number, stays. A name gives up its gaps before it gives up letters.
 * @returns lines no wider than `widthPt`; none for an empty text
 */
export function wrapText(
  text: string,
  style: TypeStyle,
  widthPt: number,
  atMost: number,
  type: TypeMeasure,
): string[] {
  const characters = [...text.trim()];
  const atGaps = brokenInto(characters, { style, widthPt, atMost, type }, breakBefore);
  if (style !== 'name' || !atGaps.isShortened) return atGaps.lines;
  return brokenInto(characters, { style, widthPt, atMost, type }, (_, count) => count).lines;
}

interface Measure {
  style: TypeStyle;
  widthPt: number;
  atMost: number;
  type: TypeMeasure;
}

function brokenInto(
  characters: string[],
  { style, widthPt, atMost, type }: Measure,
  endOf: (rest: string[], count: number) => number,
): { lines: string[]; isShortened: boolean } {
  const lines: string[] = [];
  let rest = characters;
  while (rest.length > 0 && lines.length < atMost) {
    if (lines.length === atMost - 1) {
      const whole = rest.join('');
      const last = shortened(rest, style, widthPt, type);
      return { lines: [...lines, last], isShortened: last !== whole };
    }
    const end = endOf(rest, fittingCount(rest, style, widthPt, type));
    lines.push(rest.slice(0, end).join('').replace(looseEnd, ''));
    rest = [...rest.slice(end).join('').trimStart()];
  }
  return { lines, isShortened: rest.length > 0 };
}

/** How many characters fit in the width; at least one, so that every line moves on. */
function fittingCount(characters: string[], style: TypeStyle, widthPt: number, type: TypeMeasure): number {
  const fits = (count: number) => type.widthPt(characters.slice(0, count).join(''), style) <= widthPt;
  return Math.max(1, greatest(characters.length, fits));
}

/** The greatest number up to `most` that `fits`; 0 where none does. Whatever is greater fits no better. */
function greatest(most: number, fits: (count: number) => boolean): number {
  let low = 0;
  let high = most;
  while (low < high) {
    const middle = Math.ceil((low + high) / 2);
    if (fits(middle)) low = middle;
    else high = middle - 1;
  }
  return low;
}

/** Goes back to the last place where a line may end; breaks inside a word only where there is none. */
function breakBefore(characters: string[], count: number): number {
  if (count === characters.length) return count;
  // A space that just does not fit vanishes at the line's end.
  if (/\s/.test(characters[count])) return count;
  for (let end = count; end > Math.floor(count / 3); end--)
    if (breakBehind.test(characters[end - 1])) return end;
  return count;
}

/** The text on one line, with an ellipsis in its middle where it is too long. */
function shortened(characters: string[], style: TypeStyle, widthPt: number, type: TypeMeasure): string {
  const whole = characters.join('');
  if (type.widthPt(whole, style) <= widthPt) return whole;
  const kept = (count: number) => {
    const tail = Math.floor(count / 2);
    const head = characters.slice(0, count - tail).join('');
    return `${head.trimEnd()}${ellipsis}${characters
      .slice(characters.length - tail)
      .join('')
      .trimStart()}`;
  };
  return kept(greatest(characters.length - 1, (count) => type.widthPt(kept(count), style) <= widthPt));
}
