import type { Parameters } from '../../core/parameters/table.ts';
import type { LookName } from '../../core/presets/lookName.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { FrameFigures } from '../../core/series/frameFigures.ts';
import type { MatchParts } from '../../core/series/frameMatch.ts';

/** One frame to be painted, as plain data that another machine can be sent. */
export interface FrameJob {
  /** Names the job by what is to be painted: see `jobKey`. */
  key: string;
  name: string;
  photoPath: string;
  photoSha256: string;
  widthPx: number;
  heightPx: number;
  /** Where the painting shall be written. It gets its name once it is whole, from whoever ordered it. */
  part: string;
  parameters: Parameters;
  /** What it is painted by, for people; the file says so. */
  look: LookName;
  output: OutputSettings;
  /** The photo that leads; null where nothing is matched. */
  lead: FrameLead | null;
  engineVersion: string;
}

export interface FrameLead {
  path: string;
  sha256: string;
  parameters: Parameters;
  amount01: number;
  parts: MatchParts;
  /** The frame leads itself: its figures are taken, and it is painted as it is. */
  isItself: boolean;
}

export interface PaintedJob {
  /** Of the bytes of the part. */
  sha256: string;
  pixelsSha256: string;
  /** Where the strata were written, where they were asked for. */
  layersPart: string | null;
  /** Before and after matching; null where nothing was measured. */
  figures: { before: FrameFigures; after: FrameFigures } | null;
  remarks: string[];
}

export interface FramePaintOptions {
  signal?: AbortSignal;
  onProgress?: (fraction01: number) => void;
}

/** Whoever paints frames: this process, or others by way of a queue. */
export interface FramePainter {
  /** Frames worth having under way together. */
  readonly framesAtOnce: number;
  /** Goes on painting when a run is broken: the parts that it ordered may be there when it is taken up again. */
  readonly outlivesRuns: boolean;
  /** @throws FileError naming the photo or the part */
  paint(job: FrameJob, options?: FramePaintOptions): Promise<PaintedJob>;
  /** The part has its name: nobody will ask for it again. */
  settle?(job: FrameJob): Promise<void>;
}
