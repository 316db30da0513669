import {
  mmPerInch,
  type PrintPlan,
  planMargins,
  planPrint,
  type SheetMargins,
} from '../../core/print/printPlan.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { Size } from '../geometry/viewTransform.ts';

export const shortestPrintMm = 10;
export const longestPrintMm = 10_000;

/** A print as it will lie on paper, and the file that it becomes. */
export interface PlannedPrint extends PrintPlan {
  margins: SheetMargins;
  /** Of the file, bleed and marks included. */
  fileWidthPx: number;
  fileHeightPx: number;
}

/** Plans the print of the photo on the easel, by the same rules as the file is made. */
export function planOf(photo: Size, output: OutputSettings): PlannedPrint {
  const { printLongEdgeMm, isResampled, cropFrame, bleedMm, trimMarks } = output;
  const { widthPx, heightPx } = photo;
  const geometry = { printLongEdgeMm, ppi: isResampled ? output.ppi : null, crop: cropFrame ?? null };
  const plan = planPrint({ widthPx, heightPx }, geometry);
  const margins = planMargins(plan.ppi, bleedMm, trimMarks ?? false);
  return {
    ...plan,
    margins,
    fileWidthPx: plan.widthPx + 2 * margins.outsidePx,
    fileHeightPx: plan.heightPx + 2 * margins.outsidePx,
  };
}

/**
 * How long the whole photo would be on paper at the scale of its print. Strokes are as wide on a cropped print as the
 * millimetres say, so on the whole photo they are wider than its own long edge would make them.
 */
export function wholeLongEdgeMm(photo: Size, output: OutputSettings): number {
  const { crop } = planOf(photo, output);
  const share = Math.max(photo.widthPx, photo.heightPx) / Math.max(crop.widthPx, crop.heightPx);
  return Math.min(longestPrintMm, output.printLongEdgeMm * share);
}

/** Pixels per inch that the photo's own pixels come to on this print. */
export function ownPpi(photo: Size, output: OutputSettings): number {
  return planOf(photo, { ...output, isResampled: false }).ppi;
}

const perUnit: Record<string, number> = { mm: 1, cm: 10, in: mmPerInch, '"': mmPerInch, '″': mmPerInch };

/**
 * Reads a length such as `300`, `30 cm`, `11.8 in` or `11,8″`.
 * @param plainUnit what a bare number counts in
 * @returns millimetres, to the hundredth, or null where it is no length
 */
export function readLengthMm(text: string, plainUnit: 'mm' | 'in' = 'mm'): number | null {
  const match = /^\s*(\d+(?:[.,]\d*)?|[.,]\d+)\s*(mm|cm|in|inch|inches|"|″)?\s*$/i.exec(text);
  if (!match) return null;
  const unit = (match[2] ?? plainUnit).toLowerCase().replace(/^inch(es)?$/, 'in');
  return Math.round(Number(match[1].replace(',', '.')) * perUnit[unit] * 100) / 100;
}

/** `300`, `11.81`: as many figures as are worth reading, none that say nothing. */
export function shortNumber(value: number, digits: number): string {
  return String(Number(value.toFixed(digits)));
}

export function inMm(mm: number): string {
  return shortNumber(mm, 1);
}

export function inInches(mm: number): string {
  return shortNumber(mm / mmPerInch, 2);
}

/**
 * The long edge that gives an edge of the print a wished length.
 * @param edge of the print as it is cropped
 */
export function longEdgeFor(plan: PrintPlan, edge: 'long' | 'short', lengthMm: number): number {
  if (edge === 'long') return lengthMm;
  const [shortMm, longMm] = [plan.widthMm, plan.heightMm].sort((one, other) => one - other);
  return Math.round(((lengthMm * longMm) / shortMm) * 100) / 100;
}
