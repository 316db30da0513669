import { spawn } from 'node:child_process';
import { join } from 'node:path';
import sharp from 'sharp';
import { photographs } from '../../fixtures/photographs.ts';

const program = join(import.meta.dirname, '../../../dist/main/commandLine.js');

/** A photograph brought up to so many megapixels (3 : 2), with noise of its own at every pixel, as a JPEG. */
export async function makeLargePhoto(path: string, megapixels: number): Promise<void> {
  const height = 2 * Math.round(Math.sqrt((megapixels * 1e6) / 1.5) / 2);
  const width = Math.round(height * 1.5);
  const { data, info } = await sharp(photographs.frenchAlpineLandscape)
    .removeAlpha()
    .resize(width, height, { fit: 'cover', kernel: 'cubic' })
    .raw()
    .toBuffer({ resolveWithObject: true });
  let seed = 12_345;
  for (let i = 0; i < data.length; i++) {
    seed = (Math.imul(seed, 1_664_525) + 1_013_904_223) | 0;
    // The sum of two even numbers: nearly a bell, 4 steps wide.
    const noise = ((seed >>> 24) + ((seed >>> 16) & 255) - 255) / 24;
    data[i] = Math.max(0, Math.min(255, Math.round(data[i] + noise)));
  }
  const raw = { width: info.width, height: info.height, channels: 3 as const };
  await sharp(data, { raw, limitInputPixels: false }).jpeg({ quality: 93 }).toFile(path);
}

export interface Painted {
  width: number;
  height: number;
  milliseconds: { total: number };
  peakMemoryBytes: number;
  pixelsSha256: string;
}

/** The command line as a process of its own, so that its peak memory is its own too. */
export function startPainting(photo: string, out: string, temporaryFolder: string) {
  const child = spawn(process.execPath, [program, 'paint', photo, '--out', out, '--json'], {
    env: { ...process.env, TMPDIR: temporaryFolder },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let answer = '';
  let complaint = '';
  child.stdout.on('data', (piece) => {
    answer += piece;
  });
  child.stderr.on('data', (piece) => {
    complaint += piece;
  });
  const ended = new Promise<number | null>((resolve) => child.on('close', (code) => resolve(code)));
  const painted = async (): Promise<Painted> => {
    if ((await ended) !== 0) throw new Error(complaint);
    return JSON.parse(answer);
  };
  return { child, ended, painted };
}
