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

/** How the share of flat pixels commonly rises over the logarithm of hold, until two trials tell. */
const commonSlope = 0.04;
/** Slopes below this tell nothing. */
const leastSlope = 0.008;

/**
 * The hold to try next, or to paint with, so that a frame has the lead's share of flat pixels: it rises with the
 * logarithm of hold.
 * @param trials one or more, the preset's own hold first
 */
export function nextHold(trials: readonly HoldTrial[], wanted01: number): number {
  const preset = trials[0].hold;
  const last = trials[trials.length - 1];
  const low = Math.max(leastHold, preset / holdReach);
  const high = Math.min(mostHold, preset * holdReach);
  const step = (wanted01 - last.flatShare01) / slopeOf(trials);
  return Math.round(Math.min(high, Math.max(low, last.hold * Math.exp(step))) * 1e4) / 1e4;
}

function slopeOf(trials: readonly HoldTrial[]): number {
  if (trials.length < 2) return commonSlope;
  const [a, b] = trials.slice(-2);
  const apart = Math.log(b.hold / a.hold);
  if (Math.abs(apart) < 0.05) return commonSlope;
  return Math.max(leastSlope, (b.flatShare01 - a.flatShare01) / apart);
}
