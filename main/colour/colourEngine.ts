import { fileURLToPath } from 'node:url';
import type { LittleCms } from 'lcms-wasm/dist/lcms.js';
import { littleCmsUrl } from './colourFiles.ts';

/** Spaces of pixels: how many numbers a pixel has, and what they are. */
export type PixelSpace = 'RGB' | 'CMYK' | 'GRAY';

export const channelsOf: Record<PixelSpace, number> = { RGB: 3, CMYK: 4, GRAY: 1 };

/** Numbers of the rendering intents (ICC.1, 7.2.15). */
export const intentNumber = { perceptual: 0, relative: 1, saturation: 2, absolute: 3 } as const;
export type Intent = keyof typeof intentNumber;

const blackPointCompensationFlag = 0x2000;
/** More points in the tables that LittleCMS makes of a whole chain: accuracy before memory. */
const highResolutionFlag = 0x0400;

/** No table of the whole chain at all: every colour by the profiles themselves. For few colours. */
const noTablesFlag = 0x0100;

/** R, G, B 0…1 and X, Y, Z with 1 for white: numbers of 32 bits with a point. */
const rgbFloat = (1 << 22) | (4 << 16) | (3 << 3) | 4;
const xyzFloat = (1 << 22) | (9 << 16) | (3 << 3) | 4;

const spaceNumber: Record<PixelSpace | 'Lab', number> = { RGB: 4, CMYK: 6, GRAY: 3, Lab: 10 };

/** Interleaved samples of 16 bits, as LittleCMS codes formats. */
const format16 = (space: PixelSpace | 'Lab') =>
  (spaceNumber[space] << 16) | ((space === 'Lab' ? 3 : channelsOf[space]) << 3) | 2;

/** Pixels handed to LittleCMS at a time. */
const chunkPixels = 1 << 17;

/** One way from profile to profile; 16 bits a sample on both sides. */
export interface ColourTransform {
  from: PixelSpace;
  to: PixelSpace | 'Lab';
  /** @param out has room for as many pixels as `pixels` holds */
  run(pixels: Uint16Array, out: Uint16Array): void;
  close(): void;
}

/** LittleCMS in WebAssembly. Not for the main thread: it computes for as long as it takes. */
export class ColourEngine {
  private constructor(private readonly lcms: LittleCms) {}

  static async load(): Promise<ColourEngine> {
    const { instantiate } = await import('lcms-wasm/dist/lcms.js');
    return new ColourEngine(await instantiate({ locateFile: () => fileURLToPath(littleCmsUrl()) }));
  }

  /** The space a profile describes, or null where LittleCMS cannot use it. */
  spaceOf(profile: Uint8Array): string | null {
    return this.#withProfile(profile, (handle) => this.lcms.cmsGetColorSpaceASCII(handle));
  }

  /**
   * Makes a transform.
   * @param to a profile, or `Lab` for CIE L*a*b* under D50 as 16-bit numbers (ICC.1, 6.3.4.2)
   * @throws RangeError where a profile cannot be used this way
   */
  transform(
    from: Uint8Array,
    to: Uint8Array | 'Lab',
    intent: Intent,
    blackPointCompensation: boolean,
  ): ColourTransform {
    const { lcms } = this;
    const input = this.#open(from);
    const output = to === 'Lab' ? lcms.cmsCreateLab4Profile() : this.#open(to);
    try {
      const fromSpace = pixelSpace(lcms.cmsGetColorSpaceASCII(input));
      const toSpace = to === 'Lab' ? 'Lab' : pixelSpace(lcms.cmsGetColorSpaceASCII(output));
      const flags = highResolutionFlag | (blackPointCompensation ? blackPointCompensationFlag : 0);
      const made = lcms.cmsCreateTransform(
        input,
        format16(fromSpace),
        output,
        format16(toSpace),
        intentNumber[intent],
        flags,
      );
      if (!made) throw new RangeError(`Expected profiles for the ${intent} intent, received others`);
      return this.#runner(made, fromSpace, toSpace);
    } finally {
      lcms.cmsCloseProfile(input);
      lcms.cmsCloseProfile(output);
    }
  }

  /**
   * Measures colours of an RGB profile, with its black at 0: relative colorimetric with black-point compensation.
   * @param rgb interleaved, 0…1; not modified
   * @returns X, Y, Z under D50, Y = 1 for white; beyond the numbers of 16 bits where colours are
   * @throws RangeError where the profile cannot be used this way
   */
  measureRgb(profile: Uint8Array, rgb: Float32Array): Float32Array {
    const { lcms } = this;
    const input = this.#open(profile);
    const output = lcms.cmsCreateXYZProfile();
    const at = lcms._malloc(rgb.byteLength);
    try {
      if (lcms.cmsGetColorSpaceASCII(input) !== 'RGB')
        throw new RangeError('Expected a profile for RGB, received one for another space');
      const flags = noTablesFlag | blackPointCompensationFlag;
      const intent = intentNumber.relative;
      const made = lcms.cmsCreateTransform(input, rgbFloat, output, xyzFloat, intent, flags);
      if (!made) throw new RangeError('Expected a profile that colours can be measured by, received another');
      new Float32Array(lcms.HEAPU8.buffer, at, rgb.length).set(rgb);
      lcms._cmsDoTransform(made, at, at, rgb.length / 3);
      lcms.cmsDeleteTransform(made);
      return new Float32Array(lcms.HEAPU8.buffer, at, rgb.length).slice();
    } finally {
      lcms._free(at);
      lcms.cmsCloseProfile(input);
      lcms.cmsCloseProfile(output);
    }
  }

  #runner(made: number, from: PixelSpace, to: PixelSpace | 'Lab'): ColourTransform {
    const { lcms } = this;
    const inChannels = channelsOf[from];
    const outChannels = to === 'Lab' ? 3 : channelsOf[to];
    const inAt = lcms._malloc(chunkPixels * inChannels * 2);
    const outAt = lcms._malloc(chunkPixels * outChannels * 2);
    return {
      from,
      to,
      run(pixels, out) {
        const count = pixels.length / inChannels;
        for (let first = 0; first < count; first += chunkPixels) {
          const some = Math.min(chunkPixels, count - first);
          // The heap may have grown since: its buffer is asked for anew.
          const input = new Uint16Array(lcms.HEAPU8.buffer, inAt, some * inChannels);
          input.set(pixels.subarray(first * inChannels, (first + some) * inChannels));
          lcms._cmsDoTransform(made, inAt, outAt, some);
          out.set(new Uint16Array(lcms.HEAPU8.buffer, outAt, some * outChannels), first * outChannels);
        }
      },
      close() {
        lcms.cmsDeleteTransform(made);
        lcms._free(inAt);
        lcms._free(outAt);
      },
    };
  }

  #open(profile: Uint8Array): number {
    const { lcms } = this;
    // The library's own way puts the bytes on a stack that a large profile overflows.
    const at = lcms._malloc(profile.length);
    lcms.HEAPU8.set(profile, at);
    const handle = lcms._cmsOpenProfileFromMem(at, profile.length);
    lcms._free(at);
    if (!handle) throw new RangeError('Expected an ICC profile, received other or damaged bytes');
    return handle;
  }

  #withProfile<T>(profile: Uint8Array, use: (handle: number) => T): T | null {
    let handle: number;
    try {
      handle = this.#open(profile);
    } catch {
      return null;
    }
    try {
      return use(handle);
    } finally {
      this.lcms.cmsCloseProfile(handle);
    }
  }
}

function pixelSpace(name: string | null): PixelSpace {
  if (name === 'RGB' || name === 'CMYK' || name === 'GRAY') return name;
  throw new RangeError(
    `Expected a profile for RGB, CMYK or grey, received one for ${name ?? 'an unknown space'}`,
  );
}
