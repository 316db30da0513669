import type { Stratum } from '../../core/parameters/table.ts';
import type { PlacedView, Size } from './viewTransform.ts';

/** One band of the Section, in device pixels from the Section's top. */
export interface BandPlace {
  stratum: Stratum;
  topPx: number;
  /** Strength made visible; at least `thinnestPx`. */
  thicknessPx: number;
  /** Height that the band's name and value may use. */
  slotTopPx: number;
  slotHeightPx: number;
}

export interface SectionMeasures {
  heightPx: number;
  gapPx: number;
  /** A band of no strength is still there to be pulled. */
  thinnestPx: number;
  /** Room that a name needs, however thin its band. */
  smallestSlotPx: number;
}

/** How thick a band of full strength is. */
export function fullThicknessPx(bandCount: number, measures: SectionMeasures): number {
  return Math.max(
    measures.smallestSlotPx,
    Math.floor((measures.heightPx - measures.gapPx * (bandCount - 1)) / bandCount),
  );
}

/**
 * Stacks the bands as a cross-section lies: the ground at the foot, every other band on the one beneath it.
 * @param strata bottom to top, with the strength of each, 0…1
 * @returns bottom to top
 */
export function layOutSection(
  strata: readonly { stratum: Stratum; strength01: number }[],
  measures: SectionMeasures,
): BandPlace[] {
  const fullPx = fullThicknessPx(strata.length, measures);
  let floorPx = measures.heightPx;
  return strata.map(({ stratum, strength01 }) => {
    const thicknessPx = Math.max(measures.thinnestPx, Math.round(strength01 * fullPx));
    const slotHeightPx = Math.max(measures.smallestSlotPx, thicknessPx);
    const slotTopPx = floorPx - slotHeightPx;
    const topPx = Math.round(slotTopPx + (slotHeightPx - thicknessPx) / 2);
    floorPx = slotTopPx - measures.gapPx;
    return { stratum, topPx, thicknessPx, slotTopPx, slotHeightPx };
  });
}

/** The strength that a pulled edge stands for. */
export function strengthFromPull(startStrength01: number, pulledUpPx: number, fullPx: number): number {
  return Math.min(1, Math.max(0, startStrength01 + pulledUpPx / fullPx));
}

/** Where the cut crosses the stage, in device pixels; `cut01` runs from the picture's top to its foot. */
export function cutViewY(cut01: number, view: PlacedView, photo: Size): number {
  return view.originYPx + Math.round(cutSourceY(cut01, photo) * view.scale);
}

/** The photo row on which the cut lies; always a row of the photo. */
export function cutSourceY(cut01: number, photo: Size): number {
  return Math.min(photo.heightPx - 1, Math.max(0, Math.floor(cut01 * photo.heightPx)));
}

/**
 * How a stratum's picture is laid into its band: the same scale and the same left edge as on the stage, moved
 * down so that the cut runs through the middle of the band.
 */
export function bandView(cut01: number, band: BandPlace, view: PlacedView, photo: Size): PlacedView {
  const middlePx = band.topPx + Math.floor(band.thicknessPx / 2);
  return {
    scale: view.scale,
    originXPx: view.originXPx,
    originYPx: middlePx - Math.round(cutSourceY(cut01, photo) * view.scale),
  };
}

/** Where the picture's sides stand on the stage, no further out than the gutters. */
export function bandSpan(
  view: PlacedView,
  photo: Size,
  stageWidthPx: number,
  gutters: { leftPx: number; rightPx: number },
): { leftPx: number; rightPx: number } {
  const leftPx = Math.max(gutters.leftPx, view.originXPx);
  const rightPx = Math.min(
    stageWidthPx - gutters.rightPx,
    view.originXPx + Math.round(photo.widthPx * view.scale),
  );
  return { leftPx, rightPx: Math.max(leftPx, rightPx) };
}
