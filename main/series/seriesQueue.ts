import { type Job, Queue, QueueEvents, UnrecoverableError, Worker } from 'bullmq';
import { FileError } from '../files/fileError.ts';
import type { FrameJob, FramePainter, PaintedJob, PaintOptions } from './framePainter.ts';

/**
 * A pool of machines on an existing queue engine (BullMQ on Redis). A job is named by its key, and its file is written
 * whole or not at all under one name, so that a frame that two workers happen to paint is delivered once all the same.
 */

const queueName = 'oxgall-series';
/** Jobs that failed for good, for somebody to look at. */
const deadLetterName = 'oxgall-series-dead';

const attempts = 4;
const firstPauseMs = 1000;
/** A worker that has not renewed its hold on a job for so long is taken for dead. */
const lockMs = 20_000;
const stalledCheckMs = 5_000;
const mostStalls = 10;
/** Events can be lost while Redis restarts: the state of jobs is looked at as well. */
const lookEveryMs = 1_500;

interface Connection {
  host: string;
  port: number;
  username?: string;
  password?: string;
  db?: number;
  tls?: object;
  maxRetriesPerRequest: null;
}

/** @throws FileError where the address is none of Redis */
export function readQueueAddress(address: string): Connection {
  let url: URL;
  try {
    url = new URL(address);
  } catch (cause) {
    throw new FileError(address, 'is no address of a queue', 'Use one such as redis://localhost:6379.', {
      cause,
    });
  }
  if (url.protocol !== 'redis:' && url.protocol !== 'rediss:')
    throw new FileError(address, 'is no address of a queue', 'Use one such as redis://localhost:6379.');
  return {
    host: url.hostname || '127.0.0.1',
    port: Number(url.port || 6379),
    ...(url.username && { username: decodeURIComponent(url.username) }),
    ...(url.password && { password: decodeURIComponent(url.password) }),
    ...(url.pathname.length > 1 && { db: Number(url.pathname.slice(1)) }),
    ...(url.protocol === 'rediss:' && { tls: {} }),
    // Waits through a restart of Redis instead of giving up.
    maxRetriesPerRequest: null,
  };
}

/** Has frames painted by whoever listens on the queue. */
export class QueuePainter implements FramePainter {
  readonly framesAtOnce = 10_000;
  readonly #queue: Queue<FrameJob, PaintedJob>;
  readonly #events: QueueEvents;
  readonly #waiting = new Map<
    string,
    { job: FrameJob; look: () => void; onProgress?: (done01: number) => void }
  >();
  readonly #timer: NodeJS.Timeout;

  constructor(address: string) {
    const connection = readQueueAddress(address);
    this.#queue = new Queue(queueName, { connection });
    this.#events = new QueueEvents(queueName, { connection });
    // Trouble with the connection is waited through; what it is shows when nothing comes.
    this.#queue.on('error', () => undefined);
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

  async paint(frame: FrameJob, { signal, onProgress }: PaintOptions = {}): Promise<PaintedJob> {
    signal?.throwIfAborted();
    const jobId = frame.key;
    // What an earlier run left under this name would be taken for this one's answer.
    const earlier = await this.#queue.getJob(jobId);
    if (earlier && ((await earlier.isCompleted()) || (await earlier.isFailed()))) await earlier.remove();
    await this.#queue.add('frame', frame, {
      jobId,
      attempts,
      backoff: { type: 'exponential', delay: firstPauseMs },
    });
    try {
      return await new Promise<PaintedJob>((resolve, reject) => {
        const look = () =>
          void this.#look(jobId).then(
            (found) => {
              if (found === 'waiting') return;
              if ('problem' in found) reject(new FileError(frame.photoPath, found.problem, found.remedy));
              else resolve(found);
            },
            () => undefined,
          );
        this.#waiting.set(jobId, { job: frame, look, onProgress });
        signal?.addEventListener('abort', () => reject(signal.reason), { once: true });
        look();
      });
    } finally {
      this.#waiting.delete(jobId);
    }
  }

  async #look(jobId: string): Promise<PaintedJob | { problem: string; remedy: string } | 'waiting'> {
    const job = await this.#queue.getJob(jobId);
    if (!job) return 'waiting';
    if (await job.isCompleted()) return job.returnvalue;
    if (await job.isFailed())
      return {
        problem: `could not be painted: ${job.failedReason}`,
        remedy: 'Look at it, then go on with --resume.',
      };
    return 'waiting';
  }

  /** Takes back what nobody has begun, and lets the connection go. */
  async close(): Promise<void> {
    clearInterval(this.#timer);
    await this.#events.close();
    await this.#queue.close();
  }
}

export interface QueueWorker {
  close(): Promise<void>;
}

/**
 * Paints frames from the queue until it is closed.
 * @param onJob told of each frame that ended
 */
export function workOnQueue(
  address: string,
  painter: FramePainter,
  onJob: (name: string, problem: string | null) => void,
): QueueWorker {
  const connection = readQueueAddress(address);
  const dead = new Queue(deadLetterName, { connection });
  dead.on('error', () => undefined);
  const worker = new Worker<FrameJob, PaintedJob>(queueName, (job) => paintJob(job, painter), {
    connection,
    concurrency: painter.framesAtOnce,
    lockDuration: lockMs,
    stalledInterval: stalledCheckMs,
    maxStalledCount: mostStalls,
  });
  worker.on('error', () => undefined);
  worker.on('completed', (job) => onJob(job.data.name, null));
  worker.on('failed', (job, failure) => {
    if (!job) return;
    onJob(job.data.name, failure.message);
    const isForGood = job.attemptsMade >= attempts || failure instanceof UnrecoverableError;
    if (isForGood) void dead.add('frame', job.data, { jobId: `${job.id}-dead` }).catch(() => undefined);
  });
  return {
    close: async () => {
      await worker.close();
      await dead.close();
    },
  };
}

async function paintJob(job: Job<FrameJob, PaintedJob>, painter: FramePainter): Promise<PaintedJob> {
  try {
    return await painter.paint(job.data, {
      onProgress: (fraction01) => void job.updateProgress(fraction01).catch(() => undefined),
    });
  } catch (failure) {
    // A broken photo is as broken the next time; a folder that is away for a moment is not.
    const isBroken = failure instanceof FileError && failure.path === job.data.photoPath;
    if (isBroken) throw new UnrecoverableError(failure.message);
    throw failure;
  }
}

/** Frames that failed for good on any run, by name. */
export async function readDeadLetters(address: string): Promise<{ name: string; photoPath: string }[]> {
  const dead = new Queue<FrameJob>(deadLetterName, { connection: readQueueAddress(address) });
  try {
    const jobs = await dead.getJobs(['waiting', 'delayed', 'failed']);
    return jobs.map(({ data }) => ({ name: data.name, photoPath: data.photoPath }));
  } finally {
    await dead.close();
  }
}
