import { type LengthScale, lengthToPx } from '../parameters/lengths.ts';
import type { Parameters } from '../parameters/table.ts';
import { streamlineStepPx } from './linePlan.ts';

/** How the surface of the paint is built and lit, in numbers of the relief's own level. */
export interface ReliefPlan {
  /** The relief's level is 2^shift times smaller than the painted one. */
  shift: number;
  /** Distance between bristle marks. */
  bristlePx: number;
  /** Outer weights of the noise's smoothing. */
  noiseSide: number;
  /** Gaussian of the streamlines, along the grain. */
  alongSigmaPx: number;
  streamlineSteps: number;
  /** Pixels around a tile for which noise is needed: the reach of the streamlines. */
  marginPx: number;
  /** Gaussian of the grain tensor, in blocks of two pixels. */
  tensorSigmaBlocks: number;
  tensorRadiusBlocks: number;
  /** Pixels of luma around that. */
  lumaHaloPx: number;
  /** Marks and luma → height. */
  markGain: number;
  lumaGain: number;
  /** Height → pixels. */
  slope: number;
  bearingDegrees: number;
  shine: number;
}

/** Above this the marks are made at half the size and brought up, so that their width costs nothing. */
const widestBristlePx = 2.8;
/** Below this the pixels of a preview are wider than the marks, whose contrast averages away in them. */
const finestBristlePx = 1.4;
/** A mark is this much longer than wide (standard deviations of its two sides). */
const alongFactor = 7;
const tensorSigmaBlocks = 1.6;
/** Height of the marks against the relief of the planes they lie on; chosen by eye at 100 %. */
const markShare = 0.12;
const lumaShare = 1.6;
/** `relief.height` 1 → slope; chosen by eye. */
const slopeOfFullHeight = 1.9;

const evenAbove = (n: number) => 2 * Math.ceil(n / 2);

/**
 * Turns parameters into a plan.
 * @param level pyramid level that is painted: the bristle's width follows the halving
 */
export function planRelief(parameters: Parameters, scale: LengthScale, level: number): ReliefPlan {
  let bristlePx = lengthToPx(parameters['relief.bristle'], scale) / 2 ** level;
  let shift = 0;
  for (; bristlePx >= widestBristlePx; bristlePx /= 2) shift++;
  const shownShare = Math.min(1, bristlePx / finestBristlePx);
  const widthPx = Math.max(bristlePx, finestBristlePx);
  const alongSigmaPx = alongFactor * widthPx;
  const streamlineSteps = Math.ceil((2 * alongSigmaPx) / streamlineStepPx);
  const noiseSide = Math.min(0.3, 0.12 * widthPx);
  const tensorRadiusBlocks = Math.ceil(2.5 * tensorSigmaBlocks);
  return {
    shift,
    bristlePx,
    noiseSide,
    alongSigmaPx,
    streamlineSteps,
    marginPx: evenAbove(streamlineSteps * streamlineStepPx + 1),
    tensorSigmaBlocks,
    tensorRadiusBlocks,
    lumaHaloPx: evenAbove(2 * tensorRadiusBlocks + 4),
    markGain: markShare * shownShare * unitContrastGain(noiseSide, alongSigmaPx),
    lumaGain: lumaShare,
    slope: slopeOfFullHeight * parameters['relief.height'] * widthPx,
    bearingDegrees: parameters['relief.bearing'],
    shine: parameters['relief.shine'],
  };
}

/**
 * Gain that gives drawn-out noise a standard deviation of 1: uniform noise has a variance of 1/3, each smoothing
 * leaves Σw² of it, and a Gaussian of σ steps leaves 1/(2√π·σ).
 */
function unitContrastGain(side: number, alongSigmaPx: number): number {
  const across = 2 * side ** 2 + (1 - 2 * side) ** 2;
  const sigmaSteps = alongSigmaPx / streamlineStepPx;
  return Math.sqrt((3 / across ** 2) * 2 * Math.sqrt(Math.PI) * sigmaSteps);
}

/** Pixels of the painted level around a region that its relief depends on. */
export function reliefHaloPx(plan: ReliefPlan): number {
  return (plan.marginPx + plan.lumaHaloPx + 6) << plan.shift;
}
