/** A frame is told by the aspect of its sides, in the words of paper and plates: 4:5, not 0.8. */

/** Sheets of the A series (ISO 216) keep their shape when they are halved. */
export const sheetAspect = Math.SQRT2;

export const aspectChoices = [
  { value: 'none', label: 'Whole', fullName: 'The whole picture', ratio: null },
  { value: 'square', label: '1:1', fullName: 'Square, 1 to 1', ratio: 1 },
  { value: 'plate', label: '4:5', fullName: '4 to 5', ratio: 5 / 4 },
  { value: 'film', label: '3:2', fullName: '3 to 2', ratio: 3 / 2 },
  { value: 'sheet', label: 'A', fullName: 'As sheets of the A sizes, 1 to √2', ratio: sheetAspect },
] as const;

export type AspectChoice = (typeof aspectChoices)[number]['value'];

const tolerance = 1e-4;

function isNear(one: number, other: number): boolean {
  return Math.abs(one / other - 1) < tolerance;
}

/** Which of the choices an aspect is, either way up; null for one of one's own. */
export function choiceOf(aspect: number | null): AspectChoice | null {
  const found = aspectChoices.find(({ ratio }) => {
    if (ratio === null || aspect === null) return ratio === aspect;
    return isNear(ratio, aspect) || isNear(ratio, 1 / aspect);
  });
  return found?.value ?? null;
}

/** Lying for pictures that lie, upright for the others. */
export function aspectFor(ratio: number, photo: { widthPx: number; heightPx: number }): number {
  return photo.widthPx >= photo.heightPx ? ratio : 1 / ratio;
}

const longestSide = 60;

/** `4:5`, `1:√2`, or `1.37:1` where no small whole numbers say it. */
export function aspectInWords(aspect: number): string {
  if (isNear(aspect, sheetAspect)) return '√2:1';
  if (isNear(aspect, 1 / sheetAspect)) return '1:√2';
  for (let height = 1; height <= longestSide; height += 1) {
    const width = Math.round(aspect * height);
    if (width >= 1 && width <= longestSide && isNear(width / height, aspect)) return `${width}:${height}`;
  }
  return `${Number(aspect.toFixed(3))}:1`;
}

export const narrowestAspect = 0.01;
export const widestAspect = 100;

/** Reads `4:5`, `4 x 5`, `21/9`, `1:√2` or `1.5`; null where it is no aspect that can be cut. */
export function readAspect(text: string): number | null {
  const number = '(√?\\d+(?:[.,]\\d+)?)';
  const match = new RegExp(`^\\s*${number}\\s*(?:[:x×/]\\s*${number}\\s*)?$`, 'i').exec(text);
  if (!match) return null;
  const aspect = sideOf(match[1]) / sideOf(match[2] ?? '1');
  return aspect >= narrowestAspect && aspect <= widestAspect ? aspect : null;
}

function sideOf(text: string): number {
  const isRoot = text.startsWith('√');
  const value = Number(text.replace('√', '').replace(',', '.'));
  return isRoot ? Math.sqrt(value) : value;
}
