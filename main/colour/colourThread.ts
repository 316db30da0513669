import { Worker } from 'node:worker_threads';
import { colourWorkerUrl } from './colourFiles.ts';
import type { FinishedPixels, FinishJob } from './finishPixels.ts';
import type { ScreenSpace } from './screenTable.ts';

export type ColourQuestion = { id: number } & (
  | { kind: 'finish'; job: FinishJob }
  | { kind: 'spaceOf'; profile: Uint8Array }
  | { kind: 'gamut'; from: Uint8Array; print: Uint8Array }
  | { kind: 'screen'; profile: Uint8Array; screen: ScreenSpace }
);

export type ColourAnswer =
  | { id: number; result: FinishedPixels | Uint16Array | string | null }
  | { id: number; problem: string };

interface Waiting {
  resolve(result: never): void;
  reject(error: Error): void;
}

/** A thread is let go after it has been idle for this long. */
const idleMs = 10_000;

let thread: { worker: Worker; waiting: Map<number, Waiting> } | null = null;
let idle: NodeJS.Timeout | undefined;
let nextId = 1;

/** Converts, extends and reduces pixels on a thread of its own. @throws RangeError where a profile cannot be used */
export function finishOnThread(job: FinishJob, signal?: AbortSignal): Promise<FinishedPixels> {
  return ask<FinishedPixels>({ kind: 'finish', job }, signal);
}

/** The space a profile describes, or null where it cannot be used. */
export function spaceOfProfile(profile: Uint8Array): Promise<string | null> {
  return ask<string | null>({ kind: 'spaceOf', profile });
}

/** See `gamutTable`. */
export function tableOfGamut(from: Uint8Array, print: Uint8Array): Promise<Uint16Array> {
  return ask<Uint16Array>({ kind: 'gamut', from, print });
}

/** See `screenTable`. */
export function tableForScreen(profile: Uint8Array, screen: ScreenSpace): Promise<Uint16Array | null> {
  return ask<Uint16Array | null>({ kind: 'screen', profile, screen });
}

type Asked<Question> = Question extends unknown ? Omit<Question, 'id'> : never;

function ask<Result>(question: Asked<ColourQuestion>, signal?: AbortSignal): Promise<Result> {
  signal?.throwIfAborted();
  clearTimeout(idle);
  thread ??= startThread();
  const { worker, waiting } = thread;
  const id = nextId++;
  worker.ref();
  return new Promise<Result>((resolve, reject) => {
    const stop = () => {
      // The thread computes without looking up: it is ended, and the next question starts another.
      endThread(signal?.reason instanceof Error ? signal.reason : new Error('stopped'));
    };
    signal?.addEventListener('abort', stop, { once: true });
    const settle = () => signal?.removeEventListener('abort', stop);
    waiting.set(id, {
      resolve: (result) => {
        settle();
        resolve(result);
      },
      reject: (error) => {
        settle();
        reject(error);
      },
    });
    worker.postMessage({ id, ...question });
  });
}

function startThread() {
  const worker = new Worker(colourWorkerUrl());
  const waiting = new Map<number, Waiting>();
  const started = { worker, waiting };
  worker.on('message', (answer: ColourAnswer) => {
    const one = waiting.get(answer.id);
    waiting.delete(answer.id);
    if (waiting.size === 0) rest(worker);
    if ('problem' in answer) one?.reject(new RangeError(answer.problem));
    else one?.resolve(answer.result as never);
  });
  worker.on('error', (failure) => {
    if (thread === started) endThread(failure instanceof Error ? failure : new Error(String(failure)));
  });
  return started;
}

/** An idle thread keeps nobody waiting: neither a command from ending, nor its memory for long. */
function rest(worker: Worker): void {
  worker.unref();
  idle = setTimeout(() => {
    if (thread?.worker === worker && thread.waiting.size === 0) endThread(new Error('idle'));
  }, idleMs);
  idle.unref();
}

function endThread(reason: Error): void {
  const ended = thread;
  thread = null;
  void ended?.worker.terminate();
  for (const { reject } of ended?.waiting.values() ?? []) reject(reason);
}
