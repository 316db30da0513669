/** A hold that was tried, and the share of flat pixels it gave. */
export interface HoldTrial {
  readonly hold: number;
  readonly flatShare01: number;
}

/** How far hold may go from the preset's, as a factor: further, one frame would look worked by another hand. */
export const holdReach = 5;
const leastHold = 0.04;
const mostHold = 1;
/** Shares this close are the same. */
export const closeShare01 = 0.01;

/** Slopes below this tell nothing. */
const leastSlope = 0.004;

/** How the share of flat pixels rises over the logarithm of hold, between two trials. */
export function slopeBetween(a: HoldTrial, b: HoldTrial): number {
  return Math.max(leastSlope, (b.flatShare01 - a.flatShare01) / Math.log(b.hold / a.hold));
}

/**
 * The hold to try next so that a frame has the lead's share of flat pixels, which rises with the logarithm of hold;
 * or null where another would not bring it nearer by more than what counts as the same.
 * @param trials one or more, the preset's own hold first; no two of one hold
 * @param leadSlope how the share rises in the lead: it is of the same series
 */
export function nextHold(trials: readonly HoldTrial[], wanted01: number, leadSlope: number): number | null {
  const preset = trials[0].hold;
  const last = trials[trials.length - 1];
  const slope = trials.length < 2 ? leadSlope : slopeBetween(trials[trials.length - 2], last);
  const low = Math.max(leastHold, preset / holdReach);
  const high = Math.min(mostHold, preset * holdReach);
  const step = (wanted01 - last.flatShare01) / slope;
  const hold = Math.min(high, Math.max(low, last.hold * Math.exp(step)));
  const gain01 = Math.abs(slope * Math.log(hold / last.hold));
  return gain01 < closeShare01 / 2 ? null : Math.round(hold * 1e4) / 1e4;
}
