/** What a file carries beside its pixels. */
export interface CarriedParts {
  iccProfile?: Uint8Array;
  densityPpi?: number;
  /** EXIF as a bare TIFF, already true of the painting. */
  exif?: Uint8Array;
}
