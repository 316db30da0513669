import { autoNoiseFloor } from '../../core/noise/autoNoiseFloor.ts';
import { parseLength } from '../../core/parameters/parse.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import { parameterKeys, parameterTable } from '../../core/parameters/table.ts';
import type { Rect } from '../../core/pixels/photo.ts';
import type { LevelSize } from './api/hostCommands.ts';
import { Refusal } from './refusal.ts';

/** As in the engine: the pyramid ends where an edge would get shorter than this. */
const shortestEdgePx = 4;

/** The sizes of the levels that the engine will have, before it has the photo. */
export function levelSizes(widthPx: number, heightPx: number): LevelSize[] {
  const sizes = [{ widthPx, heightPx }];
  for (let last = sizes[0]; Math.min(last.widthPx, last.heightPx) >= 2 * shortestEdgePx; last = sizes.at(-1)!)
    sizes.push({ widthPx: Math.ceil(last.widthPx / 2), heightPx: Math.ceil(last.heightPx / 2) });
  return sizes;
}

/** The part of `region` inside the level; the whole level where no region is named. */
export function clipRegion(region: Rect | undefined, level: LevelSize): Rect {
  if (!region) return { xPx: 0, yPx: 0, widthPx: level.widthPx, heightPx: level.heightPx };
  const widthPx = Math.min(region.widthPx, level.widthPx - region.xPx);
  const heightPx = Math.min(region.heightPx, level.heightPx - region.yPx);
  if (widthPx < 1 || heightPx < 1)
    throw new Refusal(
      'BadRequest',
      `Expected a region inside ${level.widthPx} × ${level.heightPx} pixels, received one at ${region.xPx}, ${region.yPx}.`,
    );
  return { ...region, widthPx, heightPx };
}

/** The region of a level 2^`steps` coarser that covers `region`. */
export function coarserRegion(region: Rect, steps: number, level: LevelSize): Rect {
  const scale = 2 ** steps;
  const xPx = Math.floor(region.xPx / scale);
  const yPx = Math.floor(region.yPx / scale);
  const endX = Math.min(level.widthPx, Math.ceil((region.xPx + region.widthPx) / scale));
  const endY = Math.min(level.heightPx, Math.ceil((region.yPx + region.heightPx) / scale));
  return { xPx, yPx, widthPx: Math.max(1, endX - xPx), heightPx: Math.max(1, endY - yPx) };
}

/**
 * The same brushwork for a photo that was decoded at 1/2^`steps` of its size: lengths in pixels shrink with
 * it, other lengths follow by themselves, and the noise floor is the one the pyramid would have there.
 * @param measuredFloor what `auto` stands for on the reduced photo
 */
export function parametersForReduced(
  parameters: Parameters,
  steps: number,
  measuredFloor: number,
): Parameters {
  if (steps === 0) return parameters;
  const scale = 2 ** steps;
  const reduced: Record<string, unknown> = { ...parameters };
  for (const key of parameterKeys) {
    const value = parameters[key];
    if (parameterTable[key].kind !== 'length' || typeof value !== 'string') continue;
    const length = parseLength(value);
    if (length?.unit === 'px') reduced[key] = `${length.value / scale}px`;
  }
  const floor = parameters['body.noiseFloor'];
  reduced['body.noiseFloor'] = floor === 'auto' ? reducedAutoFloor(measuredFloor, scale) : floor / scale;
  return reduced as Parameters;
}

/**
 * Noise shrinks with the photo, the floor of a clean photo does not; the pyramid halves both. So the clean
 * part, known from a photo without noise, is taken out, divided, and put back.
 */
function reducedAutoFloor(measuredFloor: number, scale: number): number {
  const clean = autoNoiseFloor(0);
  const noise = Math.sqrt(Math.max(0, measuredFloor ** 2 - clean ** 2));
  return Math.hypot(clean / scale, noise);
}
