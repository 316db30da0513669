import { readFile, stat } from 'node:fs/promises';
import { basename, join } from 'node:path';
import { engineVersion } from '../../core/engineVersion.ts';
import { lookCaption } from '../../core/presets/lookName.ts';
import { sha256Hex } from '../../core/recipes/contentId.ts';
import type { OutputSettings } from '../../core/recipes/outputSettings.ts';
import { type JobParts, jobKey, jobParts, whatChanged } from '../../core/series/jobKey.ts';
import { FileError } from '../files/fileError.ts';
import { readPhotoSize } from '../files/photoHeader.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
import { DiskFull, isDiskFull, requireRoomForNext } from './diskRoom.ts';
import type { FrameJob, FrameLead, FramePainter, FramePaintOptions, PaintedJob } from './framePainter.ts';
import { type FrameResult, withoutPainting } from './frameResult.ts';
import { OutputPlaces, partPath } from './outputPlaces.ts';
import { type FileEntry, type RunEntry, type RunLog, runLogName } from './runLog.ts';
import type { RunOrder } from './runSeries.ts';
import type { PlannedFrame } from './seriesPlan.ts';
import { hashStrata } from './strataHash.ts';
import type { Turns } from './turns.ts';

/** What came of painting a frame. */
export interface FrameOutcome {
  /** Null where the run was stopped in the middle of it. */
  result: FrameResult | null;
  /** What the whole run cannot go on after. */
  fault: FileError | null;
}

interface Prepared {
  parts: JobParts;
  job: FrameJob;
  /** Tells whether the photo's file is still as it was when it was hashed. */
  stamp: string;
}

/** Takes frames one by one from photo to named file, and notes every step. */
export class FrameRun {
  readonly #places: OutputPlaces;
  /** The newest file of each frame. */
  readonly #files = new Map<string, FileEntry>();
  /** How the last try at a frame ended. */
  readonly #lastTries = new Map<string, 'begun' | 'failed'>();
  #leadSha256: Promise<string> | null = null;
  #profile: Promise<string | null> | null = null;

  /** @param looking hashing is reading: a few photos at a time */
  constructor(
    private readonly painter: FramePainter,
    private readonly order: RunOrder,
    private readonly log: RunLog,
    earlier: readonly RunEntry[],
    private readonly looking: Turns,
  ) {
    this.#places = new OutputPlaces(order.outFolder, order.frames, earlier);
    for (const entry of earlier) {
      if (entry.kind === 'written' || entry.kind === 'painted') this.#files.set(entry.name, entry);
      if (entry.kind === 'begun' || entry.kind === 'failed') this.#lastTries.set(entry.name, entry.kind);
    }
  }

  async paint(frame: PlannedFrame, options: FramePaintOptions): Promise<FrameOutcome> {
    const startMs = performance.now();
    const spentMs = () => performance.now() - startMs;
    let key = '';
    try {
      const prepared = await this.looking.take(1, options.signal, () => this.#prepare(frame, options.signal));
      key = prepared.job.key;
      const { kept, reason } = await this.#keptOrReason(frame, prepared);
      if (kept) return { result: { ...kept, milliseconds: spentMs() }, fault: null };
      await requireRoomForNext(this.order.outFolder, prepared.job, this.order.output);
      const result = await this.#paint(frame, prepared, reason, options);
      return { result: { ...result, milliseconds: spentMs() }, fault: null };
    } catch (failure) {
      if (options.signal?.aborted) return { result: null, fault: null };
      return this.#noteFailed(frame, key, failure, spentMs());
    }
  }

  async #prepare(frame: PlannedFrame, signal?: AbortSignal): Promise<Prepared> {
    const { name, path } = frame;
    const { output, outFolder, shard } = this.order;
    const stamp = await stampOf(path);
    // Also finds out what is no photo at all, before anything is read for the sake of it.
    const { widthPx, heightPx } = await readPhotoSize(path, { signal });
    const { sha256 } = await fingerprintPhoto(path, signal);
    const lead = await this.#leadOf(name);
    const parameters = this.order.parametersOf(name);
    this.#profile ??= hashProfile(output);
    const profileSha256 = await this.#profile;
    const match = lead && !lead.isItself ? matchInputs(lead) : null;
    const parts = jobParts({ photoSha256: sha256, parameters, match, output, profileSha256, engineVersion });
    const key = jobKey(parts);
    const part = partPath(outFolder, runLogName(shard), key, frame.outputName);
    const photo = { photoPath: path, photoSha256: sha256, widthPx, heightPx };
    const look = this.order.lookOf(name);
    return {
      parts,
      stamp,
      job: { key, name, ...photo, part, parameters, look, output, lead, engineVersion },
    };
  }

  async #leadOf(name: string): Promise<FrameLead | null> {
    const { lead, leadPath, amount01, parametersOf, partsOf } = this.order;
    if (lead === null || amount01 <= 0) return null;
    this.#leadSha256 ??= fingerprintPhoto(leadPath).then(({ sha256 }) => sha256);
    const sha256 = await this.#leadSha256;
    const parameters = parametersOf(lead);
    return {
      path: leadPath,
      sha256,
      parameters,
      amount01,
      parts: partsOf(name),
      isItself: name === lead,
    };
  }

  /** What an earlier run left, or why it is not enough. */
  async #keptOrReason(
    { name }: PlannedFrame,
    { job, parts }: Prepared,
  ): Promise<{ kept: FrameResult | null; reason: string }> {
    const before = this.#files.get(name);
    const because = (reason: string) => ({ kept: null, reason });
    const tried = this.#lastTries.get(name);
    const underWay = 'It was under way when an earlier run ended.';
    if (!before && tried === 'begun') return because(underWay);
    if (!before) return because(tried ? 'It could not be painted before.' : 'It was not painted yet.');
    if (!this.order.resumes) return because('The run was begun anew.');
    if (before.key !== job.key) return because(whatChanged(before.parts, parts));
    const path = join(this.order.outFolder, before.output);
    const there = await fingerprintPhoto(path).catch(() => null);
    if (!there) return because(before.kind === 'written' ? underWay : 'Its file is not there any more.');
    if (there.sha256 !== before.sha256) return because('Its file was changed by another hand.');
    const { layers } = before;
    if (layers && (await hashStrata(join(this.order.outFolder, layers))) === null)
      return because('Its strata are not there any more.');
    this.#places.keep(name, path);
    const kept: FrameResult = {
      name,
      state: 'kept',
      reason: 'Painted by an earlier run; nothing has changed since.',
      output: path,
      sha256: before.sha256,
      pixelsSha256: before.pixelsSha256,
      figures: before.figures as FrameResult['figures'],
      remarks: [],
      milliseconds: 0,
    };
    return { kept, reason: '' };
  }

  async #paint(
    frame: PlannedFrame,
    prepared: Prepared,
    reason: string,
    options: FramePaintOptions,
  ): Promise<FrameResult> {
    const { job, stamp } = prepared;
    const { name } = frame;
    const wanted = this.#places.wanted(frame);
    await this.log.append({ kind: 'begun', name, key: job.key, output: basename(wanted) });
    const painted = await this.painter.paint(job, options).catch((failure) => {
      // A part's name means nothing to anyone.
      if (failure instanceof FileError && failure.path.startsWith(job.part))
        throw new FileError(wanted, failure.problem, failure.remedy, { cause: failure });
      throw failure;
    });
    if ((await stampOf(frame.path)) !== stamp)
      throw new FileError(frame.path, 'was changed while it was painted', 'Go on with --resume.');
    options.signal?.throwIfAborted();
    const { entry, remarks } = await this.#place(frame, prepared, painted);
    await this.log.append({ kind: 'painted', ...entry, reason });
    await this.painter.settle?.(job);
    const { sha256, pixelsSha256, figures } = painted;
    return {
      name,
      state: 'painted',
      reason,
      output: join(this.order.outFolder, entry.output),
      sha256,
      pixelsSha256,
      figures,
      remarks: [...painted.remarks, ...remarks],
      milliseconds: 0,
    };
  }

  /** Gives a painting its name; the log says so first. */
  async #place(frame: PlannedFrame, { job, parts }: Prepared, painted: PaintedJob) {
    const remarks: string[] = [];
    const { sha256, pixelsSha256, figures, layersPart } = painted;
    const { layers: kind } = this.order.output;
    const layersSha256 = (layersPart && (await hashStrata(layersPart))) ?? undefined;
    for (;;) {
      const place = await this.#places.choose(frame);
      if (place.remark) remarks.push(place.remark);
      const { path } = place;
      const layers = kind === 'none' || !layersPart ? null : await this.#places.chooseLayers(path, kind);
      if (layers?.remark) remarks.push(layers.remark);
      const entry = {
        name: frame.name,
        key: job.key,
        output: basename(path),
        sha256,
        pixelsSha256,
        parts: { ...parts },
        figures,
        preset: lookCaption(job.look),
        remarks: painted.remarks,
        ...(layers && { layers: basename(layers.path), layersSha256 }),
      };
      await this.log.append({ kind: 'written', ...entry });
      if (!(await this.#places.place(job.part, place))) continue;
      if (layers && layersPart) await this.#places.placeLayers(layersPart, layers.path);
      this.#places.note(entry);
      return { entry, remarks };
    }
  }

  async #noteFailed(
    { name, path }: PlannedFrame,
    key: string,
    failure: unknown,
    spentMs: number,
  ): Promise<FrameOutcome> {
    const reason = failure instanceof Error ? failure.message : String(failure);
    const full = isDiskFull(failure) ? asFileError(failure, path) : null;
    // Without its log a run does not know what it has done.
    const unlogged = await this.log.append({ kind: 'failed', name, key, reason }).then(
      () => null,
      (trouble: FileError) => trouble,
    );
    return {
      result: full ? null : withoutPainting(name, 'failed', reason, spentMs),
      fault: full ?? unlogged,
    };
  }
}

/** What of the lead decides how a frame is matched. */
function matchInputs({ sha256, parameters, amount01, parts }: FrameLead) {
  const { tone, noise, detail, ink } = parts;
  return { leadSha256: sha256, leadParameters: parameters, amount01, parts: { tone, noise, detail, ink } };
}

function asFileError(failure: unknown, path: string): FileError {
  if (failure instanceof FileError) return failure;
  return new DiskFull(path, 'the disk is full', 'Free some space, then go on with --resume.');
}

/** @throws FileError where there is no such file */
async function stampOf(path: string): Promise<string> {
  const facts = await stat(path).catch((failure) => {
    throw fileErrorFrom(path, failure);
  });
  return `${facts.ino} ${facts.size} ${facts.mtimeMs}`;
}

/** @throws FileError where the profile that the settings name cannot be read */
async function hashProfile({ profile }: OutputSettings): Promise<string | null> {
  if (typeof profile === 'string') return null;
  const { file } = profile;
  const bytes = await readFile(file).catch((failure) => {
    throw fileErrorFrom(file, failure);
  });
  return sha256Hex(bytes);
}
