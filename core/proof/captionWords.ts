import { type FigureKey, type FrameFigures, figureTable } from '../series/frameFigures.ts';

const mmPerInch = 25.4;
const captionFigures: readonly FigureKey[] = ['lightness', 'contrast', 'chroma', 'lineCoverage01'];

/** A picture's size in pixels, and on paper where its resolution is known. */
export function sizeWords(widthPx: number, heightPx: number, ppi?: number): string {
  const pixels = `${widthPx} × ${heightPx} px`;
  if (!ppi) return pixels;
  const mm = (edgePx: number) => Math.round((edgePx / ppi) * mmPerInch);
  return `${pixels} · ${mm(widthPx)} × ${mm(heightPx)} mm at ${Math.round(ppi)} ppi`;
}

/** The figures of a frame that a client can see; the units of lightness and chroma are left to those who ask. */
export function figureWords(figures: FrameFigures): string {
  const words = captionFigures.map((key) => {
    const { label, unit, digits } = figureTable[key];
    const value = unit === '%' ? figures[key] * 100 : figures[key];
    return `${label} ${value.toFixed(digits)}${unit === '%' ? ' %' : ''}`;
  });
  return words.join(' · ');
}

/** The day as it is printed on the sheet. */
export function dateWords(date: Date): string {
  return new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'long', year: 'numeric' }).format(date);
}
