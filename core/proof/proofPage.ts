import type { Paper } from './paper.ts';

// All lengths on a sheet are points of 1/72 inch, from its upper left corner.

export const pointsPerInch = 72;
export const pointsPerMm = pointsPerInch / 25.4;

/** What is written under a picture. */
export interface ProofCaption {
  /** The file's name. */
  name: string;
  /** Title and state, such as `Low Water · III`; empty where nobody knows. */
  preset: string;
  /** Lines of size and figures. */
  figures: readonly string[];
  /** What to look at, in words; empty for most. */
  note: string;
}

/** A frame to be laid on a sheet. */
export interface ProofFrame {
  /** Upright; null where the picture cannot be read. */
  sizePx: { widthPx: number; heightPx: number } | null;
  /** Why it cannot be read; shown in its place. */
  fault: string;
  caption: ProofCaption;
}

export interface ProofSettings {
  paper: Paper;
  columns: number;
  marginMm: number;
  /** The series' title. */
  title: string;
  /** As it is printed. */
  date: string;
  /** Lines at each picture's corners, where its print will be cut. */
  trimMarks?: boolean;
}

/** A style of type; `proofType` says which face and size it is. */
export type TypeStyle =
  | 'title'
  | 'running'
  | 'date'
  | 'folio'
  | 'name'
  | 'preset'
  | 'figures'
  | 'note'
  | 'fault';

/** The faces the sheet is set in. */
export type FaceName = 'serif' | 'italic' | 'sans';

export interface StyleSpec {
  face: FaceName;
  sizePt: number;
  leadingPt: number;
  colour: string;
}

const ink = '#1f1d19';
const softInk = '#5d574d';
const rust = '#94401f';

export const hairlineColour = '#b5ab99';
export const markColour = '#000000';

export const styleTable: Record<TypeStyle, StyleSpec> = {
  title: { face: 'serif', sizePt: 21, leadingPt: 25, colour: ink },
  running: { face: 'italic', sizePt: 10, leadingPt: 13, colour: softInk },
  date: { face: 'sans', sizePt: 7.5, leadingPt: 10, colour: softInk },
  folio: { face: 'serif', sizePt: 10, leadingPt: 12, colour: ink },
  name: { face: 'serif', sizePt: 9.5, leadingPt: 11.5, colour: ink },
  preset: { face: 'italic', sizePt: 9, leadingPt: 11, colour: ink },
  figures: { face: 'sans', sizePt: 6.5, leadingPt: 8.6, colour: softInk },
  note: { face: 'sans', sizePt: 6.5, leadingPt: 8.6, colour: rust },
  fault: { face: 'sans', sizePt: 7.5, leadingPt: 10, colour: rust },
};

/** Knows how wide words are. */
export interface TypeMeasure {
  widthPt(text: string, style: TypeStyle): number;
}

export interface RectPt {
  xPt: number;
  yPt: number;
  widthPt: number;
  heightPt: number;
}

export interface PlacedPicture extends RectPt {
  /** Index into the frames. */
  frame: number;
  /** Of the whole picture. */
  sizePx: { widthPx: number; heightPx: number };
}

/** A line of text on its baseline, from its left end. */
export interface PlacedText {
  text: string;
  style: TypeStyle;
  xPt: number;
  baselinePt: number;
  /** The text that this line and those that continue it stand for, where they do not say it as it is. */
  whole?: string;
  /** Goes on with the line before. */
  continues?: boolean;
}

/** A hairline from left to right. */
export interface PlacedRule {
  xPt: number;
  yPt: number;
  widthPt: number;
}

/** A trim mark: a short line along one axis. */
export interface PlacedMark {
  xPt: number;
  yPt: number;
  toXPt: number;
  toYPt: number;
}

export interface ProofPage {
  widthPt: number;
  heightPt: number;
  pictures: PlacedPicture[];
  texts: PlacedText[];
  rules: PlacedRule[];
  marks: PlacedMark[];
  /** Hairline frames in the place of pictures that cannot be shown. */
  boxes: RectPt[];
}
