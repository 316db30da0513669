import type { Kernels } from '../kernels/module.ts';
import type { Parameters } from '../parameters/table.ts';
import { blendModeNumber } from './blendModes.ts';

/** Where the strata of a run of pixels lie in the kernels' memory, as byte offsets. */
export interface StrataPointers {
  ground: number;
  groundBytesPerSample: 1 | 2;
  groundChannels: 3 | 4;
  /** R, G, B of 2 bytes a pixel. */
  body: number;
  /** Ink coverage, 1 byte a pixel. */
  line: number;
  /** Light on the surface, 1 byte a pixel; 0 where there is none. */
  relief: number;
}

/** Where the composed pixels go. */
export interface ComposedPointer {
  out: number;
  bytesPerSample: 1 | 2;
  channels: 3 | 4;
}

/** Bytes that the settings of a composition take; see `writeCompositionSettings`. */
export const compositionSettingsBytes = 48;

/** `#rrggbb` → encoded R, G, B in 0..1. */
export function parseColour(text: string): [number, number, number] {
  const number = Number.parseInt(text.slice(1), 16);
  return [(number >> 16) / 255, ((number >> 8) & 255) / 255, (number & 255) / 255];
}

/**
 * Writes what the composition kernel needs of the parameters.
 * @param settings 12 float32 in the kernels' memory
 */
export function writeCompositionSettings(settings: Float32Array, parameters: Parameters): void {
  settings.set([
    ...parseColour(parameters['ground.colour']),
    parameters['ground.paper'],
    ...parseColour(parameters['line.colour']),
    parameters['line.strength'],
    parameters['body.strength'],
    parameters['relief.strength'],
  ]);
}

/**
 * Lays the strata over one another: ground, paper over it, body at strength, line at strength and blend,
 * relief at strength by hard light, which turns no hue. The
 * same kernel makes the preview and the file, so the two agree to the bit.
 * @param settings pointer to what `writeCompositionSettings` wrote
 * @param count pixels that follow one another
 */
export function compose(
  kernels: Kernels,
  strata: StrataPointers,
  parameters: Parameters,
  settings: number,
  count: number,
  composed: ComposedPointer,
): void {
  kernels.compose(
    strata.ground,
    strata.groundBytesPerSample,
    strata.groundChannels,
    parameters['body.strength'] > 0 ? strata.body : 0,
    parameters['line.strength'] > 0 ? strata.line : 0,
    parameters['relief.strength'] > 0 ? strata.relief : 0,
    count,
    settings,
    blendModeNumber[parameters['line.blend']],
    composed.out,
    composed.bytesPerSample,
    composed.channels,
  );
}
