import type { Parameters } from '../parameters/table.ts';

/** How a layer lies on those beneath it: a blend mode of the composition, or cutting its own shape out of them. */
export type LayerMode = Parameters['line.blend'] | 'cut-out';

export type LayerContent = 'ground' | 'paper' | 'body' | 'line' | 'relief' | 'transparency';

/** One layer of a picture taken apart. */
export interface StackLayer {
  content: LayerContent;
  /** As a layout artist reads it. */
  name: string;
  opacity01: number;
  mode: LayerMode;
  channels: 3 | 4;
  bytesPerSample: 1 | 2;
}

/** Modes that make a small difference of what lies beneath larger. */
const amplifyingModes: ReadonlySet<LayerMode> = new Set([
  'colour-burn',
  'overlay',
  'hard-light',
  'soft-light',
]);

/**
 * Takes the composition apart into layers, which by the formulas of W3C Compositing and Blending give it back within
 * 1/255 of the range.
 *
 * Every layer but the last is composited over an opaque ground, for ours is a composition of colours alone; a
 * photo's transparency is cut out at the end. A program that does not know how to cut lays white there instead.
 * Relief is hard light of a grey, which equals black or white laid over it at an opacity of their own: so it is
 * stored, and no rounding of the grey can shift the tone where the surface is flat.
 * @param photo whether the photo has an alpha channel
 * @param depth bits a sample of the file. Ground and body have 16 all the same where a mode above them would make
 *   the rounding to 8 visible: of 8 bits each rounding is half a step, and the composite's own is another half
 * @returns the layers that have a part in the picture, from the ground up
 */
export function layerStack(parameters: Parameters, photo: { channels: 3 | 4 }, depth: 8 | 16): StackLayer[] {
  const lineStrength = parameters['line.strength'];
  const lineMode = parameters['line.blend'];
  const hasRelief = parameters['relief.strength'] > 0;
  const amplifies = hasRelief || (lineStrength > 0 && amplifyingModes.has(lineMode));
  const own = depth === 8 ? 1 : 2;
  const beneath = amplifies ? 2 : own;
  const opaque = { mode: 'normal', channels: 3, bytesPerSample: beneath } as const;
  const shaped = { channels: 4, bytesPerSample: own } as const;
  const stack: StackLayer[] = [
    { content: 'ground', name: 'Ground', opacity01: 1, ...opaque },
    {
      content: 'paper',
      name: 'Paper',
      opacity01: parameters['ground.paper'],
      ...opaque,
      bytesPerSample: own,
    },
    { content: 'body', name: 'Body', opacity01: parameters['body.strength'], ...opaque },
    { content: 'line', name: 'Line', opacity01: lineStrength, mode: lineMode, ...shaped },
    {
      content: 'relief',
      name: 'Relief',
      opacity01: parameters['relief.strength'],
      mode: 'hard-light',
      ...shaped,
    },
  ];
  if (photo.channels === 4)
    stack.push({ content: 'transparency', name: 'Transparency', opacity01: 1, mode: 'cut-out', ...shaped });
  return stack.filter((layer) => layer.opacity01 > 0);
}
