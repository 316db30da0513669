import type { Parameters } from '../parameters/table.ts';
import { fullParameters } from '../presets/parametersSchema.ts';
import { stateById } from '../presets/thread.ts';
import type { OutputSettings } from './outputSettings.ts';
import type { Delivery, PresetHistory, Recipe } from './recipe.ts';
import { historyOf, strokesOf } from './recipeHistory.ts';
import type { TightnessStroke } from './tightnessStroke.ts';

/** All that is needed to paint a delivered file again. */
export interface DeliveredPainting {
  delivery: Delivery;
  preset: string;
  parameters: Parameters;
  tightness: TightnessStroke[];
  output: OutputSettings;
}

/** Every delivery of a photo, oldest first within each preset. */
export function deliveredPaintings(recipe: Recipe): DeliveredPainting[] {
  return recipe.histories.flatMap((history) =>
    history.deliveries.map((delivery) => paintingOf(recipe, history, delivery)),
  );
}

function paintingOf(recipe: Recipe, { preset }: PresetHistory, delivery: Delivery): DeliveredPainting {
  const state = stateById(historyOf(recipe, preset).states, delivery.stateId);
  if (!state) throw new RangeError(`Expected a state of ${preset}, received the id ${delivery.stateId}`);
  return {
    delivery,
    preset,
    parameters: fullParameters(state.parameters),
    tightness: strokesOf(recipe, delivery.tightnessId),
    output: delivery.output,
  };
}

/** What painting a delivery again has shown. */
export type DeliveryVerdict =
  | 'identical'
  /** The photo's bytes are not those it was painted from: nothing can be said of the painting. */
  | 'photo-changed'
  /** Other pixels, from another engine: to be expected. */
  | 'engine-differs'
  /** Other pixels from the same engine and photo: this must not be. */
  | 'differs'
  /** The delivery bears no hash of its pixels. */
  | 'not-recorded';

/**
 * Compares a delivery with what today's engine paints from the same state.
 * @param today the photo's hash now, the engine's version, and the hash of the pixels it painted
 */
export function judgeDelivery(
  delivery: Delivery,
  today: { photoSha256: string; engineVersion: string; pixelsSha256: string },
): DeliveryVerdict {
  if (delivery.photoSha256 !== today.photoSha256) return 'photo-changed';
  if (delivery.pixelsSha256 === undefined) return 'not-recorded';
  if (delivery.pixelsSha256 === today.pixelsSha256) return 'identical';
  return delivery.engineVersion === today.engineVersion ? 'differs' : 'engine-differs';
}
