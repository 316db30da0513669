import type { DecodedPhoto } from '../../core/pixels/photo.ts';
import type { SpilledPixels } from './spilledPixels.ts';

/** A photo read from a file, with what has to travel on to the painted file. */
export interface PhotoFile extends DecodedPhoto {
  path: string;
  format: 'jpeg' | 'png' | 'tiff' | 'webp' | 'avif' | 'gif' | 'heif';
  /** Of the samples in `pixels`; a photo of fewer bits is spread to 8. */
  depth: 8 | 16;
  /** The embedded profile, unchanged, where the pixels are still in it. */
  iccProfile?: Uint8Array;
  /** Pixels per inch written in the file. */
  densityPpi?: number;
  exif?: Uint8Array;
  /** What was assumed or converted while reading, in plain sentences; usually empty. */
  remarks: string[];
}

export type OutputFormat = 'jpeg' | 'png' | 'tiff' | 'webp';

/** What a painted file is made of, but for its pixels. */
export interface PictureFacts {
  widthPx: number;
  heightPx: number;
  channels: 3 | 4;
  /** What the channels are; RGB, with alpha where there are four, unless given. */
  space?: 'RGB' | 'CMYK';
  format: OutputFormat;
  iccProfile?: Uint8Array;
  densityPpi?: number;
  /** The photo's EXIF; size, density and orientation in it are set right while writing. */
  exif?: Uint8Array;
  /** How much of the EXIF goes into the file; `essential` unless given. */
  metadata?: 'all' | 'essential' | 'none';
  /** What the picture is painted by, in words, and with what; both go into the EXIF. */
  description?: string;
  software?: string;
  /** 1…100, for JPEG and WebP. */
  quality?: number;
}

/** A painted file. */
export interface PictureFile extends PictureFacts {
  pixels: Uint8Array | Uint16Array;
}

/** A painted file whose pixels are in memory or, where they are too many to be held, in a temporary TIFF. */
export interface AnyPictureFile extends PictureFacts {
  pixels: Uint8Array | Uint16Array | SpilledPixels;
}
