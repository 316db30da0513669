import { lstat, mkdir, statfs } from 'node:fs/promises';
import { basename, join, resolve } from 'node:path';
import { engineVersion } from '../../core/engineVersion.ts';
import type { Parameters } from '../../core/parameters/table.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { FrameFigures } from '../../core/series/frameFigures.ts';
import { allMatchParts, type MatchParts } from '../../core/series/frameMatch.ts';
import { jobKey } from '../../core/series/jobKey.ts';
import { FileError } from '../files/fileError.ts';
import { refuseOverwritingOriginal } from '../files/outputPath.ts';
import { readPhotoSize } from '../files/photoHeader.ts';
import { removeAbandonedSpills } from '../files/spillFile.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { removeAbandoned } from '../files/unfinishedFile.ts';
import { numbered } from '../host/placeFile.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
import type { FramePainter, PaintedJob } from './framePainter.ts';
import { lockRun } from './runLock.ts';
import { type PaintedEntry, type RunEntry, RunLog, readRunLogs, runLogName } from './runLog.ts';
import { framesOfShard, type PlannedFrame, type Shard } from './seriesPlan.ts';

/** What a run makes. */
export interface RunOrder {
  folder: string;
  outFolder: string;
  frames: readonly PlannedFrame[];
  /** Of a frame, by its file name. */
  parametersOf(name: string): Parameters;
  /** File name of the lead; null where nothing is matched. */
  lead: string | null;
  leadPath: string;
  amount01: number;
  partsOf?(name: string): MatchParts;
  output: OutputSettings;
  shard: Shard | null;
  /** Leaves alone what an earlier run painted and nothing has changed since. */
  resumes: boolean;
}

/** What became of a frame. */
export interface FrameResult {
  name: string;
  state: 'painted' | 'kept' | 'failed' | 'waiting';
  /** Why it was painted, kept or not painted, in plain words. */
  reason: string;
  output: string | null;
  sha256: string | null;
  pixelsSha256: string | null;
  figures: { before: FrameFigures; after: FrameFigures } | null;
  remarks: string[];
  milliseconds: number;
}

export interface RunControl {
  signal?: AbortSignal;
  /** Resolves when the run may go on: never pending while it is not paused. */
  mayGoOn?: () => Promise<void>;
  /** Takes the next frame out of those that wait; the first one unless given. */
  chooseNext?: (waiting: readonly PlannedFrame[]) => PlannedFrame;
  onFrame?: (name: string, change: { fraction01: number } | { result: FrameResult }) => void;
}

/** Left free on the disk whatever is written. */
const spareBytes = 64 * 2 ** 20;

/**
 * Paints the frames of a series to files. A frame that fails is noted and the rest go on. Every step is in the run log
 * before it counts, so that a run that was killed is taken up again with nothing painted twice but what was under way.
 * @throws FileError where the output folder cannot be used or the disk is full
 */
export async function runSeries(
  painter: FramePainter,
  order: RunOrder,
  control: RunControl = {},
): Promise<FrameResult[]> {
  const { outFolder, shard } = order;
  await mkdir(outFolder, { recursive: true }).catch((failure) => {
    throw fileErrorFrom(outFolder, failure);
  });
  const name = runLogName(shard);
  const unlock = await lockRun(outFolder, name);
  try {
    await removeAbandoned(outFolder);
    await removeAbandonedSpills();
    const earlier = await readRunLogs(outFolder);
    const log = await RunLog.open(outFolder, name);
    try {
      await log.append({ kind: 'run', folder: order.folder });
      return await new Run(painter, order, control, log, earlier).paintAll();
    } finally {
      await log.close();
    }
  } finally {
    await unlock();
  }
}

class Run {
  readonly #waiting: PlannedFrame[];
  readonly #results = new Map<string, FrameResult>();
  readonly #painted = new Map<string, PaintedEntry>();
  /** Files that a run of ours began or finished, by path. */
  readonly #ours = new Map<string, string>();
  readonly #taken = new Set<string>();
  #leadSha256: Promise<string> | null = null;
  #fault: FileError | null = null;

  constructor(
    private readonly painter: FramePainter,
    private readonly order: RunOrder,
    private readonly control: RunControl,
    private readonly log: RunLog,
    earlier: readonly RunEntry[],
  ) {
    this.#waiting = framesOfShard(order.frames, order.shard);
    for (const entry of earlier) {
      if (entry.kind === 'painted') this.#painted.set(entry.name, entry);
      if (entry.kind === 'painted' || entry.kind === 'begun')
        this.#ours.set(join(order.outFolder, entry.output), entry.name);
    }
  }

  async paintAll(): Promise<FrameResult[]> {
    const all = [...this.#waiting];
    await Promise.all(
      Array.from({ length: Math.min(this.painter.framesAtOnce, all.length) }, () => this.#paintInTurn()),
    );
    if (this.#fault) throw this.#fault;
    return all.map(
      ({ name }) => this.#results.get(name) ?? emptyResult(name, 'waiting', 'The run was stopped.'),
    );
  }

  async #paintInTurn(): Promise<void> {
    const { signal, mayGoOn, chooseNext } = this.control;
    for (;;) {
      await mayGoOn?.();
      if (this.#fault || signal?.aborted || this.#waiting.length === 0) return;
      const frame = chooseNext?.(this.#waiting) ?? this.#waiting[0];
      this.#waiting.splice(this.#waiting.indexOf(frame), 1);
      const result = await this.#paintOne(frame);
      if (!result) return;
      this.#results.set(frame.name, result);
      this.control.onFrame?.(frame.name, { result });
    }
  }

  /** Null where the run was stopped in the middle of it. */
  async #paintOne(frame: PlannedFrame): Promise<FrameResult | null> {
    const { signal } = this.control;
    const startMs = performance.now();
    let key = '';
    try {
      const photo = await fingerprintPhoto(frame.path, signal);
      const lead = await this.#leadFor(frame);
      const parameters = this.order.parametersOf(frame.name);
      const parts = this.order.partsOf?.(frame.name) ?? allMatchParts;
      const { amount01, output } = this.order;
      key = jobKey({
        photoSha256: photo.sha256,
        parameters,
        match: lead && { leadSha256: lead.sha256, amount01, parts },
        output,
        engineVersion,
      });
      const { kept, reason } = await this.#keptOrReason(frame, key);
      if (kept) return { ...kept, milliseconds: performance.now() - startMs };
      await this.#requireSpace(frame);
      const out = await this.#outputFor(frame);
      await this.log.append({ kind: 'begun', name: frame.name, key, output: basename(out) });
      const match = lead && { leadPath: lead.path, leadParameters: lead.parameters, amount01, parts };
      const painted = await this.painter.paint(
        { key, name: frame.name, photoPath: frame.path, out, parameters, output, match },
        { signal, onProgress: (fraction01) => this.control.onFrame?.(frame.name, { fraction01 }) },
      );
      return await this.#notePainted(frame, key, painted, reason, startMs);
    } catch (failure) {
      if (signal?.aborted) return null;
      return this.#noteFailed(frame, key, failure, startMs);
    }
  }

  async #notePainted(
    { name }: PlannedFrame,
    key: string,
    painted: PaintedJob,
    reason: string,
    startMs: number,
  ): Promise<FrameResult> {
    const { sha256 } = await fingerprintPhoto(painted.path);
    const { pixelsSha256, figures, remarks } = painted;
    const output = basename(painted.path);
    await this.log.append({ kind: 'painted', name, key, output, sha256, pixelsSha256, figures, reason });
    const milliseconds = performance.now() - startMs;
    return {
      name,
      state: 'painted',
      reason,
      output: painted.path,
      sha256,
      pixelsSha256,
      figures,
      remarks,
      milliseconds,
    };
  }

  async #noteFailed(
    frame: PlannedFrame,
    key: string,
    failure: unknown,
    startMs: number,
  ): Promise<FrameResult> {
    const reason = failure instanceof Error ? failure.message : String(failure);
    if (failure instanceof DiskFull) this.#fault = failure;
    await this.log.append({ kind: 'failed', name: frame.name, key, reason });
    return { ...emptyResult(frame.name, 'failed', reason), milliseconds: performance.now() - startMs };
  }

  /** What an earlier run left, or why it is not enough. */
  async #keptOrReason(
    frame: PlannedFrame,
    key: string,
  ): Promise<{ kept: Omit<FrameResult, 'milliseconds'> | null; reason: string }> {
    const before = this.#painted.get(frame.name);
    if (!before || !this.order.resumes)
      return { kept: null, reason: before ? 'The run was begun anew.' : 'It was not painted yet.' };
    if (before.key !== key)
      return { kept: null, reason: 'The photo, its look, the lead, the output or the engine has changed.' };
    const path = join(this.order.outFolder, before.output);
    const there = await fingerprintPhoto(path).catch(() => null);
    if (!there) return { kept: null, reason: 'Its file is not there any more.' };
    if (there.sha256 !== before.sha256) return { kept: null, reason: 'Its file was changed.' };
    const { sha256, pixelsSha256 } = before;
    const figures = before.figures as FrameResult['figures'];
    this.#taken.add(path);
    const reason = 'Painted by an earlier run; nothing has changed since.';
    const kept = {
      name: frame.name,
      state: 'kept' as const,
      reason,
      output: path,
      sha256,
      pixelsSha256,
      figures,
      remarks: [],
    };
    return { kept, reason };
  }

  /** A name that is free, or whose file is this very frame's from an earlier run. */
  async #outputFor({ name, outputName }: PlannedFrame): Promise<string> {
    const wanted = join(this.order.outFolder, outputName);
    for (let number = 1; ; number++) {
      const path = numbered(wanted, number);
      if (this.#taken.has(path)) continue;
      const owner = this.#ours.get(path);
      const isFree = owner === name || (owner === undefined && !(await isThere(path)));
      if (!isFree) continue;
      this.#taken.add(path);
      for (const frame of this.order.frames) await refuseOverwritingOriginal(frame.path, path);
      return path;
    }
  }

  /** The lead that a frame is matched to; null for the lead itself. */
  async #leadFor({ name }: PlannedFrame) {
    const { lead, amount01, leadPath } = this.order;
    if (lead === null || amount01 <= 0 || name === lead) return null;
    this.#leadSha256 ??= fingerprintPhoto(leadPath).then(({ sha256 }) => sha256);
    return { path: leadPath, sha256: await this.#leadSha256, parameters: this.order.parametersOf(lead) };
  }

  async #requireSpace(frame: PlannedFrame): Promise<void> {
    const { widthPx, heightPx } = await readPhotoSize(frame.path);
    const wantedBytes = widthPx * heightPx * 3 * (this.order.output.depth / 8) + spareBytes;
    const { bavail, bsize } = await statfs(this.order.outFolder);
    if (bavail * bsize < wantedBytes)
      throw new DiskFull(
        resolve(this.order.outFolder),
        'the disk has no room for the next painting',
        'Free some space, then go on with --resume.',
      );
  }
}

/** Ends the run: the next frame would fare no better. */
class DiskFull extends FileError {}

function emptyResult(name: string, state: FrameResult['state'], reason: string): FrameResult {
  return {
    name,
    state,
    reason,
    output: null,
    sha256: null,
    pixelsSha256: null,
    figures: null,
    remarks: [],
    milliseconds: 0,
  };
}

async function isThere(path: string): Promise<boolean> {
  return lstat(path).then(
    () => true,
    () => false,
  );
}
