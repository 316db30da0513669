import type { Parameters } from '../../../core/parameters/table.ts';
import type { SpilledPixels } from '../spilledPixels.ts';
import type { FilledLayer } from './layerStore.ts';

/** A painting taken apart, with the composite that its layers give. */
export interface LayeredPicture {
  widthPx: number;
  heightPx: number;
  /** From the ground up. */
  layers: readonly FilledLayer[];
  composed: { channels: 3 | 4; pixels: Uint8Array | Uint16Array | SpilledPixels };
  parameters: Parameters;
  /** Of every layer and of the composite. */
  iccProfile?: Uint8Array;
  densityPpi?: number;
}
