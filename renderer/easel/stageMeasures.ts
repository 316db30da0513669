import type { SectionMeasures } from '../geometry/sectionLayout.ts';
import type { FitMargin } from '../geometry/viewTransform.ts';

/** Room at the Section's sides for names and values; the cut's handles stand in the same columns. CSS pixels. */
export const gutterLeftPx = 92;
export const gutterRightPx = 76;

export function fitMargin(devicePixelRatio: number): FitMargin {
  return {
    sidePx: Math.round(gutterLeftPx * devicePixelRatio),
    topPx: Math.round(26 * devicePixelRatio),
    bottomPx: Math.round(44 * devicePixelRatio),
  };
}

export function sectionMeasures(heightPx: number, devicePixelRatio: number): SectionMeasures {
  return {
    heightPx: Math.round(heightPx * devicePixelRatio),
    gapPx: Math.round(3 * devicePixelRatio),
    thinnestPx: Math.round(3 * devicePixelRatio),
    smallestSlotPx: Math.round(24 * devicePixelRatio),
  };
}
