import { throughTable } from '../../core/colour/colourTable.ts';
import {
  type ComposedPointer,
  compose,
  compositionSettingsBytes,
  type StrataPointers,
  writeCompositionSettings,
} from '../../core/composition/compose.ts';
import { createKernelMemory, instantiateKernels, type Kernels } from '../../core/kernels/module.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import type { Strata } from '../../core/pixels/photo.ts';
import { BlockHeap } from './blockHeap.ts';
import { ComposeHands } from './composeHands.ts';
import type { WayToScreen } from './messages.ts';

/** Turns strata into the pixels of the canvas. */
export interface Composer {
  /** Copies the strata into the kernels' memory. */
  hold(strata: Strata): HeldStrata;
  /** Takes effect with the next composition. */
  setWayToScreen(way: WayToScreen): void;
}

export interface HeldStrata {
  /** Views of the kernels' memory, until `release`. */
  readonly strata: Strata;
  /** What the numbers of the composed picture mean. */
  readonly space: PredefinedColorSpace;
  /** Interleaved R, G, B, A, straight alpha, in that space; written into `target`. */
  compose(parameters: Parameters, target: Uint8ClampedArray): void;
  /** The same in the photo's own colours. */
  composeOwn(parameters: Parameters): Uint8ClampedArray;
  /** Brings pixels in the photo's colours to the canvas's. */
  toScreen(rgba: Uint8ClampedArray): void;
  release(): void;
}

/** Loads the kernels that the files are composed by, so that picture and file agree to the bit. */
export async function createComposer(): Promise<Composer> {
  const response = await fetch('/kernels.wasm');
  if (!response.ok) throw new Error(`The kernels cannot be loaded: the host answered ${response.status}.`);
  const module = await WebAssembly.compile(await response.arrayBuffer());
  const memory = createKernelMemory();
  const kernels = await instantiateKernels(module, memory);
  const heap = new BlockHeap(memory);
  const composeHere = kernels.compose as (...part: number[]) => void;
  const hands = new ComposeHands((part) => composeHere(...part), { module, memory }, helperCount());
  // The kernel as composition knows it, done by all hands.
  const shared: Kernels = { ...kernels, compose: (...whole) => hands.compose(whole) };
  const screen: WayToScreen = { table: null, space: 'srgb' };
  return {
    hold: (strata) => holdStrata(shared, heap, strata, screen),
    setWayToScreen: (way) => {
      Object.assign(screen, way);
    },
  };
}

/** The window's own thread and the host want their share of the machine. */
function helperCount(): number {
  return Math.min(3, Math.max(0, navigator.hardwareConcurrency - 1));
}

function holdStrata(
  kernels: Kernels,
  heap: BlockHeap,
  strata: Strata,
  /** As it stands whenever something is composed. */
  screen: WayToScreen,
): HeldStrata {
  const count = strata.widthPx * strata.heightPx;
  const bytesPerSample = strata.ground.BYTES_PER_ELEMENT as 1 | 2;
  const groundPointer = heap.allocate(strata.ground.byteLength);
  const bodyPointer = heap.allocate(strata.body.byteLength);
  const linePointer = heap.allocate(strata.line.byteLength);
  const reliefPointer = strata.relief ? heap.allocate(strata.relief.byteLength) : 0;
  const outPointer = heap.allocate(count * 4);
  const settingsPointer = heap.allocate(compositionSettingsBytes);
  // Views stay good when shared memory grows: the old buffer is a prefix of the new one.
  const { buffer } = heap.memory;
  const ground =
    bytesPerSample === 2
      ? new Uint16Array(buffer, groundPointer, strata.ground.length)
      : new Uint8Array(buffer, groundPointer, strata.ground.length);
  const body = new Uint16Array(buffer, bodyPointer, strata.body.length);
  const line = new Uint8Array(buffer, linePointer, strata.line.length);
  const relief = strata.relief && new Uint8Array(buffer, reliefPointer, strata.relief.length);
  ground.set(strata.ground);
  body.set(strata.body);
  line.set(strata.line);
  if (strata.relief) relief?.set(strata.relief);
  const out = new Uint8ClampedArray(buffer, outPointer, count * 4);
  const settings = new Float32Array(buffer, settingsPointer, compositionSettingsBytes / 4);
  const pointers: StrataPointers = {
    ground: groundPointer,
    groundBytesPerSample: bytesPerSample,
    groundChannels: strata.groundChannels,
    body: bodyPointer,
    line: linePointer,
    relief: reliefPointer,
  };
  const composed: ComposedPointer = { out: outPointer, bytesPerSample: 1, channels: 4 };
  const toScreen = (rgba: Uint8ClampedArray) => {
    if (screen.table) throughTable(rgba, screen.table);
  };
  const composeOut = (parameters: Parameters) => {
    writeCompositionSettings(settings, parameters);
    compose(kernels, pointers, parameters, settingsPointer, count, composed);
  };
  return {
    strata: { ...strata, ground, body, line, relief },
    get space() {
      return screen.space;
    },
    compose(parameters, target) {
      composeOut(parameters);
      target.set(out);
      toScreen(target);
    },
    composeOwn(parameters) {
      composeOut(parameters);
      return out.slice();
    },
    toScreen,
    release() {
      for (const pointer of [groundPointer, bodyPointer, linePointer, outPointer, settingsPointer])
        heap.free(pointer);
      if (reliefPointer) heap.free(reliefPointer);
    },
  };
}
