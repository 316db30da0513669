import type { ProofCaption } from '../../core/proof/proofPage.ts';

/** Pixels made for a proof, upright, straight alpha. */
export interface ProofPixels {
  widthPx: number;
  heightPx: number;
  channels: 3 | 4;
  pixels: Uint8Array | Uint16Array;
  /** sRGB is assumed where there is none. */
  iccProfile?: Uint8Array;
}

/** A picture in a file, or one that is painted when its turn comes. */
export type ProofPicture =
  | { path: string }
  | {
      /** Names the picture in messages. */
      path: string;
      /** Of the whole picture, upright. */
      widthPx: number;
      heightPx: number;
      /**
       * Makes it, at its own size or any smaller one that is not below what is asked for.
       * @param needed pixels that will be printed
       */
      paint(needed: { widthPx: number; heightPx: number }, signal?: AbortSignal): Promise<ProofPixels>;
    };

/** A frame of a proof. */
export interface ProofSource {
  picture: ProofPicture;
  /** Where it has no line about the picture's size, one is put first. */
  caption: ProofCaption;
}

/** A frame that could not be shown; its place on the sheet says so too. */
export interface ProofFault {
  path: string;
  message: string;
}
