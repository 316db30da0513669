import { createHash } from 'node:crypto';
import { Queue } from 'bullmq';
import type { FrameJob, PaintedJob } from './framePainter.ts';
import { readQueueAddress, requireAnswer } from './queueAddress.ts';

/**
 * The queue of frames, on an existing queue engine (BullMQ on Redis). Workers paint into parts; the run that ordered a
 * part gives it its name and notes it, so that a frame is delivered once, however often it was painted.
 */
export const queueName = 'oxgall-series';

/** A frame that is not painted after so many tries goes to the list of failed ones. */
export const attempts = 4;
const firstPauseMs = 1000;

export type FrameQueue = Queue<FrameJob, PaintedJob>;

/** @throws FileError where nobody answers at the address */
export async function openQueue(address: string): Promise<FrameQueue> {
  const queue: FrameQueue = new Queue(queueName, {
    connection: readQueueAddress(address),
    defaultJobOptions: { attempts, backoff: { type: 'exponential', delay: firstPauseMs } },
  });
  // Trouble with the connection is waited through.
  queue.on('error', () => undefined);
  try {
    await requireAnswer(address, queue.waitUntilReady());
    return queue;
  } catch (failure) {
    await queue.disconnect().catch(() => undefined);
    throw failure;
  }
}

/** The same frame into the same part is the same job, also when a run is taken up again. */
export function queueJobId({ key, part }: FrameJob): string {
  return createHash('sha256').update(`${key}\n${part}`).digest('hex');
}

/** A frame that nobody could paint. */
export interface DeadLetter {
  name: string;
  photoPath: string;
  reason: string;
  tries: number;
}

/** Frames that failed for good, of any run; they stay until a run puts them on the queue again. */
export async function readDeadLetters(queue: FrameQueue): Promise<DeadLetter[]> {
  const jobs = await queue.getFailed();
  return jobs.map(({ data, failedReason, attemptsMade }) => ({
    name: data.name,
    photoPath: data.photoPath,
    reason: failedReason,
    tries: attemptsMade,
  }));
}
