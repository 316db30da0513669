import { rename, rm } from 'node:fs/promises';
import { dirname } from 'node:path';
import { type Job, UnrecoverableError, Worker } from 'bullmq';
import { engineVersion } from '../../core/engineVersion.ts';
import { FileError } from '../files/fileError.ts';
import { listUnderWay, removeAbandoned, removeQuietly, temporaryPath } from '../files/unfinishedFile.ts';
import { flushFolder } from '../host/flushFolder.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
import type { FrameJob, FramePainter, PaintedJob } from './framePainter.ts';
import { readQueueAddress, requireAnswer } from './queueAddress.ts';
import { queueName } from './seriesQueue.ts';

/** A worker that has not renewed its hold on a job for so long is taken for dead. */
const lockMs = 20_000;
const stalledCheckMs = 5_000;
const mostStalls = 10;

export interface QueueWorker {
  /** Takes no more frames and waits for those under way. */
  close(): Promise<void>;
}

/**
 * Paints frames from the queue until it is closed.
 * @param onJob told of each try that ended, and what went wrong
 * @throws FileError where nobody answers at the address
 */
export async function workOnQueue(
  address: string,
  painter: FramePainter,
  onJob: (name: string, problem: string | null) => void,
): Promise<QueueWorker> {
  const hand = new Hand(painter);
  const worker = new Worker<FrameJob, PaintedJob>(queueName, (job, token) => hand.paint(job, token ?? ''), {
    connection: readQueueAddress(address),
    concurrency: painter.framesAtOnce,
    lockDuration: lockMs,
    stalledInterval: stalledCheckMs,
    maxStalledCount: mostStalls,
  });
  // Trouble with the connection is waited through.
  worker.on('error', () => undefined);
  worker.on('completed', (job) => onJob(job.data.name, null));
  worker.on('failed', (job, failure) => job && onJob(job.data.name, failure.message));
  try {
    await requireAnswer(address, worker.waitUntilReady());
  } catch (failure) {
    await worker.disconnect().catch(() => undefined);
    throw failure;
  }
  return { close: () => worker.close() };
}

/** Paints one try at a frame. */
class Hand {
  readonly #tidied = new Set<string>();

  constructor(private readonly painter: FramePainter) {}

  async paint(job: Job<FrameJob, PaintedJob>, token: string): Promise<PaintedJob> {
    const { data } = job;
    try {
      await this.#tidy(dirname(data.part));
      await requireSameInputs(data);
      return await this.#paintPart(job, token);
    } catch (failure) {
      if (isHopeless(failure, data)) throw new UnrecoverableError((failure as Error).message);
      throw failure;
    }
  }

  /** Written under a name of this process first: a frame that was given to another worker meanwhile is that one's. */
  async #paintPart(job: Job<FrameJob, PaintedJob>, token: string): Promise<PaintedJob> {
    const { part } = job.data;
    const own = temporaryPath(dirname(part));
    const done = listUnderWay({ discard: () => removeQuietly(own) });
    try {
      const painted = await this.painter.paint(
        { ...job.data, part: own },
        { onProgress: (fraction01) => void job.updateProgress(fraction01).catch(() => undefined) },
      );
      if (!(await job.extendLock(token, lockMs)))
        throw new Error('Another worker has taken this frame over.');
      const layersPart = painted.layersPart && `${part}.strata`;
      if (painted.layersPart && layersPart) {
        await rm(layersPart, { recursive: true, force: true });
        await rename(painted.layersPart, layersPart);
      }
      await rename(own, part);
      await flushFolder(dirname(part));
      return { ...painted, layersPart };
    } finally {
      done();
      await rm(own, { force: true });
      await rm(`${own}.strata`, { recursive: true, force: true });
    }
  }

  /** What a worker of this machine left when it was killed, once for each folder. */
  async #tidy(folder: string): Promise<void> {
    if (this.#tidied.has(folder)) return;
    this.#tidied.add(folder);
    await removeAbandoned(folder);
  }
}

/** @throws where this machine would not paint what was ordered; it may be otherwise in a moment, or elsewhere */
async function requireSameInputs(job: FrameJob): Promise<void> {
  if (job.engineVersion !== engineVersion)
    throw new Error(
      `This worker paints with engine ${engineVersion}, the run with ${job.engineVersion}: use one version.`,
    );
  const { sha256 } = await fingerprintPhoto(job.photoPath);
  if (sha256 !== job.photoSha256)
    throw new FileError(
      job.photoPath,
      'is another photo here than where the run was begun',
      'Let all machines see one folder.',
      { cause: { code: 'OTHER' } },
    );
}

/** A broken photo is as broken the next time; a folder that is away for a moment is not. */
function isHopeless(failure: unknown, job: FrameJob): boolean {
  if (!(failure instanceof FileError) || failure.path !== job.photoPath) return false;
  const { code } = (failure.cause ?? {}) as NodeJS.ErrnoException;
  return code === undefined;
}
