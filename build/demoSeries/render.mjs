// Renders the demo series, "photographs" of The Ferry at Low Water, into a folder.
//   node build/demoSeries/render.mjs --out DIR [--frames 1,3] [--scale 0.25] [--first-look] [--workers 2]

import { mkdir } from 'node:fs/promises';
import { availableParallelism } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { Worker } from 'node:worker_threads';
import { frames } from './frames.mjs';
import { writeWhole } from './plateFile.mjs';

/** Pixels of a plate of the first look. */
const firstLookPixels = 420_000;

/**
 * @typedef {object} RenderedPlate
 * @property {number} number @property {string} name file name @property {string} path
 * @property {number} widthPx upright @property {number} heightPx upright
 * @property {number} orientation @property {number} milliseconds
 */

/** The plates there are: number, file name, caption, full size upright, orientation tag. */
export function listDemoSeries() {
  return frames.map(({ name, caption, widthPx, heightPx, orientation }, i) => ({
    number: i + 1,
    name: `${name}.jpg`,
    caption,
    widthPx,
    heightPx,
    orientation,
  }));
}

/**
 * Renders plates to JPEG files, one thread a plate. The bytes depend on the plate and its scale alone.
 * @param {object} options
 * @param {string} options.outDir made if need be; plates of the same name there are replaced
 * @param {number[]} [options.numbers] which plates, from 1; all by default
 * @param {number} [options.scale] share of the full size, 0…1
 * @param {boolean} [options.firstLook] all plates small, for a first look in a few seconds
 * @param {number} [options.workers]
 * @param {(plate: RenderedPlate) => void} [options.onFrame] called as each plate is written
 * @param {AbortSignal} [options.signal]
 * @returns {Promise<RenderedPlate[]>} in order of their numbers
 */
export async function renderDemoSeries({
  outDir,
  numbers,
  scale = 1,
  firstLook = false,
  workers,
  onFrame,
  signal,
}) {
  const wanted = [...new Set(numbers ?? frames.map((_, i) => i + 1))];
  for (const number of wanted)
    if (!frames[number - 1])
      throw new RangeError(`expected a plate from 1 to ${frames.length}, received ${number}`);
  if (!(scale > 0 && scale <= 1))
    throw new RangeError(`expected a scale over 0 and up to 1, received ${scale}`);
  signal?.throwIfAborted();
  await mkdir(outDir, { recursive: true });
  const scaleOf = ({ widthPx, heightPx }) =>
    firstLook ? Math.min(scale, Math.sqrt(firstLookPixels / (widthPx * heightPx))) : scale;
  const queue = wanted.map((number) => ({ number, scale: scaleOf(frames[number - 1]) }));
  const threads = Math.min(workers ?? Math.min(2, availableParallelism()), queue.length);
  const done = [];
  const stop = new AbortController();
  const runs = Array.from({ length: threads }, () => runThread(queue, outDir, done, onFrame, signal, stop));
  const ends = await Promise.allSettled(runs);
  const failed = ends.find((end) => end.status === 'rejected');
  if (failed) throw failed.reason;
  return done.sort((a, b) => a.number - b.number);
}

/** Takes plates off the queue until it is empty; ends its thread whatever happens. */
async function runThread(queue, outDir, done, onFrame, signal, stop) {
  const thread = new Worker(new URL('./frameWorker.mjs', import.meta.url));
  try {
    while (queue.length > 0) {
      signal?.throwIfAborted();
      if (stop.signal.aborted) return;
      const job = queue.shift();
      const started = performance.now();
      const answer = await askThread(thread, job, signal);
      if (answer.fault) throw new Error(`plate ${job.number} could not be rendered: ${answer.fault}`);
      const { name, orientation } = frames[job.number - 1];
      const path = join(outDir, `${name}.jpg`);
      await writeWhole(path, answer.bytes);
      const milliseconds = Math.round(performance.now() - started);
      const plate = {
        number: job.number,
        name: `${name}.jpg`,
        path,
        widthPx: answer.widthPx,
        heightPx: answer.heightPx,
        orientation,
        milliseconds,
      };
      done.push(plate);
      onFrame?.(plate);
    }
  } catch (error) {
    stop.abort();
    throw error;
  } finally {
    await thread.terminate();
  }
}

function askThread(thread, job, signal) {
  return new Promise((resolve, reject) => {
    const forget = () => {
      thread.off('message', answered);
      thread.off('error', broke);
      signal?.removeEventListener('abort', aborted);
    };
    const answered = (message) => {
      forget();
      resolve(message);
    };
    const broke = (error) => {
      forget();
      reject(error);
    };
    const aborted = () => broke(signal.reason);
    thread.on('message', answered);
    thread.on('error', broke);
    signal?.addEventListener('abort', aborted, { once: true });
    thread.postMessage(job);
  });
}

function readArguments(words) {
  const options = {};
  const take = { '--out': 'outDir', '--frames': 'numbers', '--scale': 'scale', '--workers': 'workers' };
  for (let i = 0; i < words.length; i++) {
    if (words[i] === '--first-look') options.firstLook = true;
    else if (take[words[i]] && i + 1 < words.length) {
      const key = take[words[i]];
      const value = words[++i];
      options[key] =
        key === 'outDir' ? value : key === 'numbers' ? value.split(',').map(Number) : Number(value);
    } else
      throw new RangeError(
        `expected --out DIR [--frames 1,3] [--scale 0.25] [--first-look] [--workers 2], received ${words[i]}`,
      );
  }
  if (!options.outDir) throw new RangeError('expected --out DIR, the folder for the plates');
  return options;
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  try {
    const onFrame = ({ name, widthPx, heightPx, milliseconds }) =>
      process.stdout.write(`${name}  ${widthPx}×${heightPx}  ${(milliseconds / 1000).toFixed(1)} s\n`);
    await renderDemoSeries({ ...readArguments(process.argv.slice(2)), onFrame });
  } catch (error) {
    process.stderr.write(`${error.message}\n`);
    process.exitCode = 1;
  }
}
