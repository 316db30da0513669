/** A decoded photo: upright, full resolution, encoded values as the file holds them. */
export interface DecodedPhoto {
  widthPx: number;
  heightPx: number;
  /** 3: R, G, B; 4: R, G, B, straight alpha. Interleaved, rows without padding. */
  channels: 3 | 4;
  /** Uint8Array: 0…255; Uint16Array: 0…65535. */
  pixels: Uint8Array | Uint16Array;
}

/** A rectangle in pixels of the picture at hand. */
export interface Rect {
  xPx: number;
  yPx: number;
  widthPx: number;
  heightPx: number;
}

/**
 * The layers of a painted picture or of a region of it, ready for composition. Ground keeps the photo's own
 * numbers; body is R, G, B in 0…65535; line is ink coverage in 0…255; relief is light in
 * 0…254, 127 where the surface is flat. All interleaved, rows without padding.
 */
export interface Strata {
  widthPx: number;
  heightPx: number;
  ground: Uint8Array | Uint16Array;
  groundChannels: 3 | 4;
  body: Uint16Array;
  line: Uint8Array;
  /** Null where the strength is 0: nothing was lit. */
  relief: Uint8Array | null;
}

/** Light of a flat surface in a relief stratum. */
export const flatRelief = 127;

/** Rows of the layers of a picture, as in `Strata`; a stratum is null where its strength is 0. */
export interface StrataRows {
  ground: Uint8Array | Uint16Array;
  groundChannels: 3 | 4;
  body: Uint16Array | null;
  line: Uint8Array | null;
  relief: Uint8Array | null;
}
