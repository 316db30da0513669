import { setTimeout as pause } from 'node:timers/promises';
import { type Job, QueueEvents } from 'bullmq';
import { FileError } from '../files/fileError.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
import type { FrameJob, FramePainter, FramePaintOptions, PaintedJob } from './framePainter.ts';
import { readQueueAddress } from './queueAddress.ts';
import { type FrameQueue, openQueue, queueJobId, queueName } from './seriesQueue.ts';

/** Events can be lost while Redis restarts: the state of jobs is looked at as well. */
const lookEveryMs = 1_500;
/** A shared folder may show a file a little later here than where it was written. */
const partPatienceMs = 15_000;
const partLookMs = 200;

interface Waiting {
  look: () => void;
  onProgress?: (done01: number) => void;
}

/** Has frames painted by whoever listens on the queue. */
export class QueuePainter implements FramePainter {
  /** Enough for many machines; more would only be hashed earlier than needed. */
  readonly framesAtOnce = 256;
  readonly outlivesRuns = true;
  readonly #events: QueueEvents;
  readonly #waiting = new Map<string, Waiting>();
  readonly #timer: NodeJS.Timeout;

  private constructor(
    private readonly queue: FrameQueue,
    address: string,
  ) {
    this.#events = new QueueEvents(queueName, { connection: readQueueAddress(address) });
    this.#events.on('error', () => undefined);
    this.#events.on('completed', ({ jobId }) => this.#waiting.get(jobId)?.look());
    this.#events.on('failed', ({ jobId }) => this.#waiting.get(jobId)?.look());
    this.#events.on('progress', ({ jobId, data }) => {
      if (typeof data === 'number') this.#waiting.get(jobId)?.onProgress?.(data);
    });
    this.#timer = setInterval(() => {
      for (const { look } of this.#waiting.values()) look();
    }, lookEveryMs);
  }

  /** @throws FileError where nobody answers at the address */
  static async open(address: string): Promise<QueuePainter> {
    return new QueuePainter(await openQueue(address), address);
  }

  /** How many workers listen at the moment. */
  async countWorkers(): Promise<number> {
    return (await this.queue.getWorkers()).length;
  }

  async paint(frame: FrameJob, { signal, onProgress }: FramePaintOptions = {}): Promise<PaintedJob> {
    signal?.throwIfAborted();
    const jobId = queueJobId(frame);
    await this.#clearEarlier(frame, jobId);
    await this.queue.add('frame', frame, { jobId });
    try {
      const painted = await this.#await(frame, jobId, { signal, onProgress });
      await requirePart(frame, painted, partPatienceMs);
      return painted;
    } catch (failure) {
      // Nobody needs to begin what nobody waits for; what is under way stays locked and is left alone.
      if (signal?.aborted) await this.#remove(jobId);
      throw failure;
    }
  }

  /** An earlier run's answer is taken where its part is there; else it would stand in the way of this one's. */
  async #clearEarlier(frame: FrameJob, jobId: string): Promise<void> {
    const earlier = await this.queue.getJob(jobId);
    if (!earlier) return;
    const isUsable =
      (await earlier.isCompleted()) &&
      (await requirePart(frame, earlier.returnvalue, 0).then(
        () => true,
        () => false,
      ));
    if (!isUsable && ((await earlier.isCompleted()) || (await earlier.isFailed()))) await earlier.remove();
  }

  #await(frame: FrameJob, jobId: string, { signal, onProgress }: FramePaintOptions): Promise<PaintedJob> {
    return new Promise<PaintedJob>((resolve, reject) => {
      const look = () =>
        void this.#look(jobId).then(
          (found) => {
            if (found === 'waiting') return;
            if (found === 'lost') this.queue.add('frame', frame, { jobId }).catch(() => undefined);
            else if ('problem' in found)
              reject(new FileError(frame.photoPath, found.problem, 'Go on with --resume to try again.'));
            else resolve(found);
          },
          // Redis is away: looked at again soon.
          () => undefined,
        );
      this.#waiting.set(jobId, { look, onProgress });
      signal?.addEventListener('abort', () => reject(signal.reason), { once: true });
      look();
    }).finally(() => this.#waiting.delete(jobId));
  }

  async #look(jobId: string): Promise<PaintedJob | { problem: string } | 'waiting' | 'lost'> {
    const job: Job<FrameJob, PaintedJob> | undefined = await this.queue.getJob(jobId);
    // Redis may have come back without what it was told last.
    if (!job) return 'lost';
    if (await job.isCompleted()) return job.returnvalue;
    if (await job.isFailed()) return { problem: `could not be painted (${job.failedReason})` };
    return 'waiting';
  }

  async settle(frame: FrameJob): Promise<void> {
    await this.#remove(queueJobId(frame));
  }

  async #remove(jobId: string): Promise<void> {
    await this.queue.remove(jobId).catch(() => undefined);
  }

  async close(): Promise<void> {
    clearInterval(this.#timer);
    // A connection that Redis cut cannot be closed in good order, which must not cost the run its report.
    await Promise.allSettled([this.#events.close(), this.queue.close()]);
  }
}

/** @throws FileError where the part is not there as it was painted */
async function requirePart({ name, part }: FrameJob, painted: PaintedJob, patienceMs: number): Promise<void> {
  const untilMs = performance.now() + patienceMs;
  for (;;) {
    const found = await fingerprintPhoto(part).catch(() => null);
    if (found?.sha256 === painted.sha256) return;
    if (performance.now() >= untilMs) break;
    await pause(partLookMs);
  }
  throw new FileError(
    part,
    `what a worker painted of ${name} has not arrived in the output folder`,
    'Check that all machines see one folder under this path, then go on with --resume.',
  );
}
