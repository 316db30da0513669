import { lstat, mkdir, readdir, rm } from 'node:fs/promises';
import { join } from 'node:path';
import type { Parameters } from '../../core/parameters/table.ts';
import type { LookName } from '../../core/presets/lookName.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import type { MatchParts } from '../../core/series/frameMatch.ts';
import { framesOfShard, type Shard } from '../../core/series/shards.ts';
import type { FileError } from '../files/fileError.ts';
import { readPhotoSize } from '../files/photoHeader.ts';
import { removeAbandonedSpills } from '../files/spillFile.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { removeAbandoned } from '../files/unfinishedFile.ts';
import { DiskFull, requireRoomForAll } from './diskRoom.ts';
import type { FramePainter } from './framePainter.ts';
import { type FrameResult, withoutPainting } from './frameResult.ts';
import { FrameRun } from './frameRun.ts';
import { lockRun } from './runLock.ts';
import { type RunEntry, RunLog, readRunLogs, runLogName } from './runLog.ts';
import type { PlannedFrame } from './seriesPlan.ts';
import { Turns } from './turns.ts';

/** What a run makes. */
export interface RunOrder {
  folder: string;
  outFolder: string;
  /** Of the whole series, also where only a shard is painted. */
  frames: readonly PlannedFrame[];
  /** Of a frame, by its file name. */
  parametersOf(name: string): Parameters;
  /** What a frame is painted by, for people. */
  lookOf(name: string): LookName;
  /** File name of the lead; null where nothing is matched. */
  lead: string | null;
  leadPath: string;
  amount01: number;
  partsOf(name: string): MatchParts;
  output: OutputSettings;
  shard: Shard | null;
  /** Leaves alone what an earlier run painted and nothing has changed since. */
  resumes: boolean;
}

export type FrameChange = { fraction01: number } | { result: FrameResult };

export interface RunControl {
  signal?: AbortSignal;
  /** Resolves when the run may go on: never pending while it is not paused. */
  mayGoOn?: () => Promise<void>;
  /** Takes the next frame out of those that wait; the first one unless given. */
  chooseNext?: (waiting: readonly PlannedFrame[]) => PlannedFrame;
  onFrame?: (name: string, change: FrameChange) => void;
}

export interface RunOutcome {
  results: FrameResult[];
  /** What ended the run before all frames had their turn, such as a full disk; null where nothing did. */
  stoppedBy: FileError | null;
  /** Photos of an earlier run that are not in the folder any more. */
  gone: string[];
}

/** Photos looked at at the same time before they are painted. */
const looksAtOnce = 4;

/**
 * Paints the frames of a series to files. A frame that fails is noted and the rest go on. Every step is in the run log
 * before it counts, so that a run that was killed is taken up again with nothing painted twice but what was under way.
 * @throws FileError where the output folder cannot be used
 */
export async function runSeries(
  painter: FramePainter,
  order: RunOrder,
  control: RunControl = {},
): Promise<RunOutcome> {
  const { outFolder, shard } = order;
  await mkdir(outFolder, { recursive: true }).catch((failure) => {
    throw fileErrorFrom(outFolder, failure);
  });
  const lock = await lockRun(outFolder, shard);
  try {
    await removeAbandoned(outFolder);
    await removeAbandonedSpills();
    if (!painter.outlivesRuns) await removeParts(outFolder, shard);
    const earlier = await readRunLogs(outFolder);
    const log = await RunLog.open(outFolder, runLogName(shard));
    try {
      await log.append({ kind: 'run', folder: order.folder });
      const signals = control.signal ? [lock.lost, control.signal] : [lock.lost];
      const guarded = { ...control, signal: AbortSignal.any(signals) };
      const outcome = await new Run(painter, order, guarded, log, earlier).paintAll();
      return lock.lost.aborted ? { ...outcome, stoppedBy: lock.lost.reason } : outcome;
    } finally {
      await log.close();
      if (!lock.lost.aborted) await removeParts(outFolder, shard);
    }
  } finally {
    await lock.release();
  }
}

/** Removes what painters wrote for this run, or this shard, and nobody gave a name. */
async function removeParts(folder: string, shard: Shard | null): Promise<void> {
  await removeAbandoned(folder);
  const prefix = `.${runLogName(shard)}.`;
  for (const name of await readdir(folder))
    if (name.startsWith(prefix) && /\.part(\.strata)?$/.test(name))
      await rm(join(folder, name), { recursive: true, force: true });
}

class Run {
  readonly #waiting: PlannedFrame[];
  readonly #results = new Map<string, FrameResult>();
  readonly #frames: FrameRun;
  readonly #looking = new Turns(looksAtOnce);
  readonly #framesAtOnce: number;
  #fault: FileError | null = null;

  constructor(
    painter: FramePainter,
    private readonly order: RunOrder,
    private readonly control: RunControl,
    log: RunLog,
    private readonly earlier: readonly RunEntry[],
  ) {
    this.#waiting = framesOfShard(order.frames, order.shard);
    this.#framesAtOnce = painter.framesAtOnce;
    this.#frames = new FrameRun(painter, order, log, earlier, this.#looking);
  }

  async paintAll(): Promise<RunOutcome> {
    const all = [...this.#waiting];
    await this.#requireRoom(all).catch((failure) => {
      if (!(failure instanceof DiskFull)) throw failure;
      this.#fault = failure;
    });
    const turns = Array.from({ length: Math.min(this.#framesAtOnce, all.length) }, () => this.#paintInTurn());
    // Whatever happens to one, the others are waited for: nothing may be written after the lock is given back.
    for (const turn of await Promise.allSettled(turns)) if (turn.status === 'rejected') throw turn.reason;
    const whyNot = this.#fault?.message ?? 'The run was stopped.';
    return {
      results: all.map(({ name }) => this.#results.get(name) ?? withoutPainting(name, 'waiting', whyNot)),
      stoppedBy: this.#fault,
      gone: await this.#findGone(),
    };
  }

  async #paintInTurn(): Promise<void> {
    const { signal, mayGoOn, chooseNext, onFrame } = this.control;
    for (;;) {
      await mayGoOn?.();
      if (this.#fault || signal?.aborted || this.#waiting.length === 0) return;
      const frame = chooseNext?.(this.#waiting) ?? this.#waiting[0];
      this.#waiting.splice(this.#waiting.indexOf(frame), 1);
      const { result, fault } = await this.#frames.paint(frame, {
        signal,
        onProgress: (fraction01) => onFrame?.(frame.name, { fraction01 }),
      });
      this.#fault ??= fault;
      if (!result) continue;
      this.#results.set(frame.name, result);
      onFrame?.(frame.name, { result });
    }
  }

  /** Looks at what is still to be painted, as far as that can be told without reading the photos. */
  async #requireRoom(frames: readonly PlannedFrame[]): Promise<void> {
    const { outFolder, output, resumes } = this.order;
    const known = new Set(
      this.earlier.flatMap((entry) => (resumes && entry.kind === 'painted' ? [entry.name] : [])),
    );
    const sizes = await Promise.all(
      frames
        .filter(({ name }) => !known.has(name))
        .map(({ path }) => this.#looking.take(1, undefined, () => readPhotoSize(path).catch(() => null))),
    );
    const readable = sizes.filter((size) => size !== null);
    await requireRoomForAll(outFolder, readable, output);
  }

  async #findGone(): Promise<string[]> {
    const there = new Set(this.order.frames.map(({ name }) => name));
    const names = new Set(this.earlier.flatMap((entry) => (entry.kind === 'run' ? [] : [entry.name])));
    const gone: string[] = [];
    for (const name of names) {
      if (there.has(name)) continue;
      const facts = await lstat(join(this.order.folder, name)).catch(() => null);
      if (!facts) gone.push(name);
    }
    return gone;
  }
}
