import { type ChildProcess, spawn } from 'node:child_process';
import { createHash } from 'node:crypto';
import { readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import sharp from 'sharp';

export const program = fileURLToPath(new URL('../../dist/main/commandLine.js', import.meta.url));

export interface Ended {
  code: number | null;
  signal: NodeJS.Signals | null;
  out: string;
  err: string;
}

/** Starts the built program with a data folder of the test's own. */
export function startProgram(
  dataFolder: string,
  words: string[],
): { child: ChildProcess; ended: Promise<Ended> } {
  const child = spawn(process.execPath, [program, ...words], {
    env: { ...process.env, OXGALL_DATA: dataFolder },
  });
  let [out, err] = ['', ''];
  child.stdout.on('data', (text) => {
    out += text;
  });
  child.stderr.on('data', (text) => {
    err += text;
  });
  const ended = new Promise<Ended>((resolve) =>
    child.on('close', (code, signal) => resolve({ code, signal, out, err })),
  );
  return { child, ended };
}

/** Frames of one photograph that differ in exposure, size and noise; `count` of them, about `widthPx` wide. */
export async function writeFrames(
  folder: string,
  photograph: string,
  count: number,
  widthPx: number,
): Promise<string[]> {
  const names: string[] = [];
  for (let i = 0; i < count; i++) {
    const name = `plate ${i + 1}.jpg`;
    const width = widthPx + 8 * (i % 5);
    await sharp(photograph)
      .resize(width)
      .modulate({ brightness: 0.85 + 0.05 * (i % 7) })
      .jpeg({ quality: 93 })
      .toFile(join(folder, name));
    names.push(name);
  }
  return names;
}

/** SHA-256 of every painting in a folder, by name. */
export async function hashesOf(folder: string): Promise<Record<string, string>> {
  const names = (await readdir(folder)).filter((name) => name.endsWith('.png')).sort();
  const hashes = await Promise.all(
    names.map(async (name) => {
      const bytes = await readFile(join(folder, name));
      return [name, createHash('sha256').update(bytes).digest('hex')] as const;
    }),
  );
  return Object.fromEntries(hashes);
}

/** How often each frame was begun, from the log's own lines. */
export async function beginningsIn(folder: string): Promise<Map<string, number>> {
  const text = await readFile(join(folder, 'run.oxgall.jsonl'), 'utf8');
  const counts = new Map<string, number>();
  for (const line of text.split('\n').filter(Boolean)) {
    let entry: { kind: string; name: string };
    try {
      entry = JSON.parse(line);
    } catch {
      continue;
    }
    if (entry.kind === 'begun') counts.set(entry.name, (counts.get(entry.name) ?? 0) + 1);
  }
  return counts;
}
