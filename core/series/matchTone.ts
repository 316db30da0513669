import type { Triple } from '../colour/lab.ts';
import { mongeKantorovichMap, partOfMap, type StretchLimits, stretchLimits } from './mongeKantorovich.ts';
import {
  darkestPart,
  momentsOf,
  type Palette,
  type ToneFigures,
  toneFiguresOf,
  unclippedPart,
} from './palette.ts';
import { roundedToneMap, type ToneMap } from './toneMap.ts';

/** Rounds of correction: each brings the rest down to a third or less. */
const rounds = 8;
/** Differences below these are not worth another round: L*, a*, b*, deviation of L*. */
const enough = 0.02;

/**
 * The tone map that takes a frame to the lead: the linear Monge–Kantorovich map in Oklab, then corrected until,
 * after clipping to the gamut, the means of L*, a*, b* and the deviation of L* agree. Without the correction, what
 * a bright frame has lost in its clipped highlights would remain as a shift.
 * @param frame @param lead colours of both; not modified
 * @param amount01 0 changes nothing (null is returned), 1 goes all the way
 */
export function matchTone(
  frame: Palette,
  lead: Palette,
  amount01: number,
  limits: StretchLimits = stretchLimits,
): ToneMap | null {
  if (amount01 <= 0) return null;
  const first = firstMap(frame, lead, limits);
  const wanted = toneFiguresOf(lead);
  let best = first;
  let leastMiss = missOf(toneFiguresOf(frame, first), wanted);
  let map = first;
  for (let round = 0; round < rounds && leastMiss > enough; round++) {
    map = correctedMap(map, frame, wanted);
    if (!isWithin(map, limits)) break;
    const miss = missOf(toneFiguresOf(frame, map), wanted);
    if (miss < leastMiss) [best, leastMiss] = [map, miss];
  }
  return roundedToneMap(partOfMap(best, amount01));
}

/** A frame clipped in less than this keeps its whole palette; one clipped in nearly all of it has nothing else. */
const leastClipped = 0.02;
const mostClipped = 0.8;

/**
 * The map before correction. What is clipped has lost its colour: counted in, it would make the rest too strong in
 * colour. So a frame that is clipped is compared without what is, and with as large a part of the lead, its darkest.
 */
function firstMap(frame: Palette, lead: Palette, limits: StretchLimits): ToneMap {
  const { part, share01 } = unclippedPart(frame);
  const clipped = 1 - share01;
  if (clipped < leastClipped || clipped > mostClipped || unclippedPart(lead).share01 <= share01)
    return mongeKantorovichMap(momentsOf(frame), momentsOf(lead), limits);
  return mongeKantorovichMap(momentsOf(part), momentsOf(darkestPart(lead, share01)), limits);
}

function missOf(figures: ToneFigures, wanted: ToneFigures): number {
  const [l, a, b] = figures.mean.map((value, i) => value - wanted.mean[i]);
  return Math.hypot(l, a, b, figures.deviationL - wanted.deviationL);
}

/** One step of Newton's method in four unknowns: the offset, and the stretch of lightness about the lead's mean. */
function correctedMap(map: ToneMap, frame: Palette, wanted: ToneFigures): ToneMap {
  const here = vectorOf(toneFiguresOf(frame, map));
  const target = vectorOf(wanted);
  const moves = steps.map((step) => {
    const moved = vectorOf(toneFiguresOf(frame, changedMap(map, step, frame)));
    return moved.map((value, i) => value - here[i]);
  });
  const shares = solve(
    moves,
    target.map((value, i) => value - here[i]),
  );
  if (!shares) return map;
  const change = [0, 1, 2, 3].map((i) => {
    const whole = shares.reduce((sum, share, k) => sum + share * steps[k][i], 0);
    return Math.max(-largestStep, Math.min(largestStep, whole));
  });
  return changedMap(map, change, frame);
}

const tiny = 0.002;
/** The directions that are tried: offset of L, a, b; stretch of L. */
const steps: readonly number[][] = [
  [tiny, 0, 0, 0],
  [0, tiny, 0, 0],
  [0, 0, tiny, 0],
  [0, 0, 0, tiny],
];
const largestStep = 0.1;

function vectorOf(figures: ToneFigures): number[] {
  return [...figures.mean, figures.deviationL];
}

/** Offset and lightness row changed; the stretch leaves the frame's mean lightness in its place. */
function changedMap(map: ToneMap, [l, a, b, stretch]: readonly number[], frame: Palette): ToneMap {
  const { mean } = momentsOf(frame);
  const [row, ...others] = map.matrix;
  const factor = 1 + stretch;
  const mapped = row[0] * mean[0] + row[1] * mean[1] + row[2] * mean[2];
  const lightness: Triple = [row[0] * factor, row[1] * factor, row[2] * factor];
  const [x, y, z] = map.offset;
  return {
    matrix: [lightness, others[0], others[1]],
    offset: [x + l - stretch * mapped, y + a, z + b],
  };
}

/** Whether lightness is still stretched within the limits and not turned about. */
function isWithin(map: ToneMap, limits: StretchLimits): boolean {
  const gain = map.matrix[0][0];
  return gain >= limits.least && gain <= limits.most;
}

/** Solves Σ shares[k]·moves[k] = wanted by elimination with row exchange; null where the moves do not suffice. */
function solve(moves: readonly number[][], wanted: readonly number[]): number[] | null {
  const n = wanted.length;
  const rows = wanted.map((value, i) => [...moves.map((move) => move[i]), value]);
  for (let column = 0; column < n; column++) {
    let pivot = column;
    for (let r = column + 1; r < n; r++)
      if (Math.abs(rows[r][column]) > Math.abs(rows[pivot][column])) pivot = r;
    if (Math.abs(rows[pivot][column]) < 1e-9) return null;
    [rows[column], rows[pivot]] = [rows[pivot], rows[column]];
    for (let r = 0; r < n; r++) {
      if (r === column) continue;
      const factor = rows[r][column] / rows[column][column];
      for (let c = column; c <= n; c++) rows[r][c] -= factor * rows[column][c];
    }
  }
  return rows.map((row, i) => row[n] / row[i]);
}
