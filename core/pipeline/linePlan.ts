import { type LengthScale, lengthToPx } from '../parameters/lengths.ts';
import type { Parameters } from '../parameters/table.ts';

/** How the ink line is drawn, in numbers of the line's own level. */
export interface LinePlan {
  source: Parameters['line.source'];
  /** The line's level is 2^shift times smaller than the painted one. */
  shift: number;
  /** Narrower Gaussian across the grain, in pixels of the line's level. */
  sigmaPx: number;
  /** Gaussian of the streamlines, along the grain. */
  alongSigmaPx: number;
  /** Gaussian of the grain tensor, in blocks of two pixels. */
  tensorSigmaBlocks: number;
  tensorRadiusBlocks: number;
  /** Pixels that the difference of Gaussians reads on each side. */
  dogReachPx: number;
  streamlineSteps: number;
  /** Pixels around a tile for which S across the grain is needed: the reach of the streamlines. */
  marginPx: number;
  /** Pixels of luma around that. */
  lumaHaloPx: number;
  /** ε: S below it takes ink. */
  threshold: number;
  /** φ: how steeply ink sets in. */
  phi: number;
}

/** Edge emphasis p of S = (1+p)·G_σ − p·G_kσ. */
export const edgeEmphasis = 20;
/** Step of a streamline in pixels: S varies slowly along the grain. */
export const streamlineStepPx = 2;
/** An inked line is about twice as wide as the Gaussian that finds it. */
const sigmaShareOfWidth = 0.5;
/** Above this the line is found at half the size and brought up before the threshold, so that width costs nothing. */
const widestSigmaPx = 2.4;
/** Along the grain, and for the grain's own Gaussian, as multiples of the σ across. */
const alongFactor = 4;
const tensorFactor = 1.8;
/** Standard deviations of the wider Gaussian that the difference of Gaussians is cut at: 2.5 · 1.6, as its kernel. */
const dogCut = 2.5 * 1.6;
/** φ = this / softness: softness 0.2 gives φ = 6. */
const phiTimesSoftness = 1.2;
const hardestPhi = 100;
const thinnestSigmaPx = 0.5;

const evenAbove = (n: number) => 2 * Math.ceil(n / 2);

/**
 * Turns parameters into a plan.
 * @param level pyramid level that is painted: the ink's width follows the halving
 */
export function planLine(parameters: Parameters, scale: LengthScale, level: number): LinePlan {
  const widthPx = lengthToPx(parameters['line.width'], scale) / 2 ** level;
  let sigmaPx = Math.max(thinnestSigmaPx, sigmaShareOfWidth * widthPx);
  let shift = 0;
  for (; sigmaPx >= widestSigmaPx; sigmaPx /= 2) shift++;
  const alongSigmaPx = alongFactor * sigmaPx;
  const tensorSigmaBlocks = Math.max(0.6, (tensorFactor * sigmaPx) / 2);
  const tensorRadiusBlocks = Math.ceil(2.5 * tensorSigmaBlocks);
  const dogReachPx = Math.ceil(dogCut * sigmaPx);
  const streamlineSteps = Math.ceil((2 * alongSigmaPx) / streamlineStepPx);
  return {
    source: parameters['line.source'],
    shift,
    sigmaPx,
    alongSigmaPx,
    tensorSigmaBlocks,
    tensorRadiusBlocks,
    dogReachPx,
    streamlineSteps,
    marginPx: evenAbove(streamlineSteps * streamlineStepPx + 1),
    lumaHaloPx: evenAbove(Math.max(dogReachPx + 2, 2 * tensorRadiusBlocks + 4)),
    threshold: parameters['line.threshold'],
    phi: Math.min(hardestPhi, phiTimesSoftness / Math.max(parameters['line.softness'], 1e-6)),
  };
}

/** Pixels of the painted level around a region that its line depends on. */
export function lineHaloPx(plan: LinePlan): number {
  return (plan.marginPx + plan.lumaHaloPx + 4) << plan.shift;
}
