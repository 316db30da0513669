declare module 'lcms-wasm/dist/lcms.js' {
  /** What this project uses of LittleCMS; handles are addresses, 0 for none. */
  export interface LittleCms {
    HEAPU8: Uint8Array;
    _malloc(bytes: number): number;
    _free(pointer: number): void;
    _cmsOpenProfileFromMem(pointer: number, bytes: number): number;
    _cmsDoTransform(transform: number, input: number, output: number, count: number): void;
    cmsCloseProfile(profile: number): void;
    cmsGetColorSpaceASCII(profile: number): string | null;
    cmsCreateLab4Profile(): number;
    cmsCreateXYZProfile(): number;
    cmsCreateTransform(
      input: number,
      inputFormat: number,
      output: number,
      outputFormat: number,
      intent: number,
      flags: number,
    ): number;
    cmsDeleteTransform(transform: number): void;
  }
  export function instantiate(options: { locateFile(name: string): string }): Promise<LittleCms>;
}
