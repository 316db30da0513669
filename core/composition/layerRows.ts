import type { Parameters } from '../parameters/table.ts';
import { flatRelief, type StrataRows } from '../pixels/photo.ts';
import { parseColour } from './compose.ts';
import type { StackLayer } from './layerStack.ts';

type Samples = Uint8Array | Uint16Array;

/**
 * The samples of one layer for a run of pixels.
 * @param strata not modified
 * @param first number of the first pixel in `strata`
 * @param to filled from its start: as many pixels as it holds, of the layer's channels and bytes
 * @throws RangeError where the strata lack what the layer is made of
 */
export function fillLayer(
  layer: StackLayer,
  strata: StrataRows,
  parameters: Parameters,
  first: number,
  to: Samples,
): void {
  const top = layer.bytesPerSample === 1 ? 255 : 65535;
  if (layer.content === 'ground') fillGround(strata, first, to);
  else if (layer.content === 'paper') fillColour(parseColour(parameters['ground.colour']), top, to);
  else if (layer.content === 'body') fillBody(present(strata.body, layer), first, to);
  else if (layer.content === 'line')
    fillLine(present(strata.line, layer), parseColour(parameters['line.colour']), first, top, to);
  else if (layer.content === 'relief') fillRelief(present(strata.relief, layer), first, top, to);
  else fillTransparency(strata, first, top, to);
}

function present<T>(stratum: T | null, { name }: StackLayer): T {
  if (!stratum) throw new RangeError(`Expected a stratum for the layer ${name}, received none`);
  return stratum;
}

/** Factor from one range to another; 8 to 16 bits is exact. */
function rangeOf(samples: Samples): number {
  return samples instanceof Uint8Array ? 255 : 65535;
}

function fillGround({ ground, groundChannels }: StrataRows, first: number, to: Samples): void {
  const scale = rangeOf(to) / rangeOf(ground);
  let at = first * groundChannels;
  for (let i = 0; i < to.length; i += 3, at += groundChannels) {
    to[i] = ground[at] * scale + 0.5;
    to[i + 1] = ground[at + 1] * scale + 0.5;
    to[i + 2] = ground[at + 2] * scale + 0.5;
  }
}

function fillColour(colour: [number, number, number], top: number, to: Samples): void {
  const [red, green, blue] = colour.map((value) => Math.round(value * top));
  for (let i = 0; i < to.length; i += 3) {
    to[i] = red;
    to[i + 1] = green;
    to[i + 2] = blue;
  }
}

function fillBody(body: Uint16Array, first: number, to: Samples): void {
  const from = body.subarray(first * 3, first * 3 + to.length);
  if (to instanceof Uint16Array) to.set(from);
  else for (let i = 0; i < to.length; i++) to[i] = (from[i] + 128) / 257;
}

function fillLine(
  line: Uint8Array,
  colour: [number, number, number],
  first: number,
  top: number,
  to: Samples,
): void {
  const [red, green, blue] = colour.map((value) => Math.round(value * top));
  const scale = top / 255;
  for (let i = 0, at = first; i < to.length; i += 4, at++) {
    to[i] = red;
    to[i + 1] = green;
    to[i + 2] = blue;
    to[i + 3] = line[at] * scale;
  }
}

function fillRelief(relief: Uint8Array, first: number, top: number, to: Samples): void {
  for (let i = 0, at = first; i < to.length; i += 4, at++) {
    const light = relief[at] - flatRelief;
    const colour = light > 0 ? top : 0;
    to[i] = colour;
    to[i + 1] = colour;
    to[i + 2] = colour;
    to[i + 3] = (Math.abs(light) / flatRelief) * top + 0.5;
  }
}

function fillTransparency({ ground, groundChannels }: StrataRows, first: number, top: number, to: Samples) {
  const scale = top / rangeOf(ground);
  for (let i = 0, at = first * groundChannels + 3; i < to.length; i += 4, at += groundChannels) {
    to[i] = top;
    to[i + 1] = top;
    to[i + 2] = top;
    // Rounded as the composition rounds the alpha it keeps.
    to[i + 3] = top - Math.round(ground[at] * scale);
  }
}
