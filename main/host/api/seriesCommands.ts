import type { FrameFigures } from '../../../core/series/frameFigures.ts';
import type { Remedy } from '../../../core/series/oddOnesOut.ts';
import type { SeriesSettings } from '../../../core/series/seriesDocument.ts';

/**
 * The series on the Wall. Frames are known by their file names. What is changed travels as settings, whole fields at
 * a time, so that undo sends the same fields as they were.
 */
export interface SeriesCommands {
  /** Opens a folder as a series, with what its series file remembers. Sizes and figures follow as events. */
  openSeries: { input: { path: string }; output: SeriesView };
  /** The series again, after a `seriesChanged`. */
  readSeries: { input: OfSeries; output: SeriesView };
  /** Stops what is under way and gives the memory back; every change is on the disk when it answers. */
  closeSeries: { input: OfSeries; output: Record<string, never> };
  /** Replaces the fields that are named. */
  changeSeries: { input: OfSeries & { change: Partial<SeriesSettings> }; output: SeriesView };
  /** Paints a small picture of a frame, matched to the lead: plane `rgba`, 8 bits. */
  paintFramePicture: { input: PaintFramePictureInput; frame: FramePictureHeader };
  /** Sets the series on a proof sheet: a PDF, or PNGs. Progress comes as events under the call's id. */
  makeProof: { input: MakeProofInput; output: ProofMade };
}

export interface OfSeries {
  seriesId: string;
}

export interface SeriesView {
  seriesId: string;
  folder: string;
  name: string;
  settings: SeriesSettings;
  /** In natural order of their file names. */
  frames: FrameView[];
  /** `readOnly`: the folder cannot be written, or the file is a newer version's; changes last as long as the window. */
  access: 'writable' | 'readOnly';
  problems: { name: string; message: string }[];
  /** Plates of the demo that are still being made; 0 for other folders. */
  coming: number;
}

export interface FrameView {
  /** Its file name. */
  frameId: string;
  path: string;
  /** Upright; 0 until the header was read. */
  widthPx: number;
  heightPx: number;
  state: 'waiting' | 'measuring' | 'ready' | 'unreadable';
  /** Why it cannot be read. */
  message?: string;
  /** Of its painting, matched. */
  measured: FrameFigures | null;
  odd: FrameOddity | null;
  /** Changes when the frame's picture must be painted again. */
  pictureKey: string;
}

export interface FrameOddity {
  /** One sentence. */
  reason: string;
  /** What would change something, the one to offer first. */
  remedies: Remedy[];
  /** The match has brought it in: the photo is odd, its painting is not. */
  isMatched: boolean;
}

export interface PaintFramePictureInput extends OfSeries {
  frameId: string;
  longEdgePx: number;
  /** From a quick decode, for the first moments. */
  rough: boolean;
}

export interface FramePictureHeader {
  frameId: string;
  widthPx: number;
  heightPx: number;
  rough: boolean;
  pictureKey: string;
}

export interface MakeProofInput extends OfSeries {
  folder: string;
  /** `.pdf` or `.png` is put to it where it has neither. */
  name: string;
  format: 'pdf' | 'png';
  /** A name such as `A4`, or a size such as `200x250`. */
  paper: string;
  landscape: boolean;
  columns: number;
  title: string;
}

export interface ProofMade {
  files: string[];
  folder: string;
  pages: number;
  frames: number;
  /** Frames that could not be shown, and what else there is to say. */
  remarks: string[];
}
