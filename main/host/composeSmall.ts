import {
  compose,
  compositionSettingsBytes,
  writeCompositionSettings,
} from '../../core/composition/compose.ts';
import { createKernelMemory, instantiateKernels, pageBytes } from '../../core/kernels/module.ts';
import type { Strata } from '../../core/pixels/photo.ts';
import { loadKernelModule } from '../engine/kernelFiles.ts';
import type { ComposeSmall } from './hostParts.ts';

const alignmentBytes = 16;

/**
 * Composes pictures of a few hundred pixels in a memory of its own, with the kernel that also makes the
 * preview and the file. Not for more: it runs on the thread that answers the window.
 */
export async function loadComposeSmall(): Promise<ComposeSmall> {
  const memory = createKernelMemory();
  const kernels = await instantiateKernels(await loadKernelModule(), memory);
  // The module's own constants lie at the start of the memory; what it works on is put behind them.
  const startBytes = memory.buffer.byteLength;
  return async (strata, parameters) => {
    const count = strata.widthPx * strata.heightPx;
    let endBytes = startBytes;
    const reserve = (bytes: number) => {
      const pointer = endBytes;
      endBytes += Math.ceil(bytes / alignmentBytes) * alignmentBytes;
      return pointer;
    };
    const ground = reserve(strata.ground.byteLength);
    const body = reserve(strata.body.byteLength);
    const line = reserve(strata.line.byteLength);
    const relief = strata.relief ? reserve(strata.relief.byteLength) : 0;
    const settings = reserve(compositionSettingsBytes);
    const out = reserve(count * 4);
    const missingBytes = endBytes - memory.buffer.byteLength;
    if (missingBytes > 0) memory.grow(Math.ceil(missingBytes / pageBytes));
    copyIn(memory, strata, { ground, body, line, relief });
    writeCompositionSettings(
      new Float32Array(memory.buffer, settings, compositionSettingsBytes / 4),
      parameters,
    );
    compose(
      kernels,
      {
        ground,
        groundBytesPerSample: strata.ground instanceof Uint16Array ? 2 : 1,
        groundChannels: strata.groundChannels,
        body,
        line,
        relief,
      },
      parameters,
      settings,
      count,
      { out, bytesPerSample: 1, channels: 4 },
    );
    return new Uint8Array(memory.buffer, out, count * 4).slice();
  };
}

function copyIn(
  memory: WebAssembly.Memory,
  strata: Strata,
  to: { ground: number; body: number; line: number; relief: number },
): void {
  for (const name of ['ground', 'body', 'line', 'relief'] as const) {
    const stratum = strata[name];
    if (!stratum) continue;
    const { buffer, byteOffset, byteLength } = stratum;
    new Uint8Array(memory.buffer, to[name], byteLength).set(new Uint8Array(buffer, byteOffset, byteLength));
  }
}
