import { type FileHandle, open, readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { z } from 'zod';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { flushFolder } from '../host/flushFolder.ts';

/** The newest version of the log that is written here; lines of a newer one are passed over. */
const logVersion = 1;

const frameBase = { v: z.literal(logVersion), time: z.string(), name: z.string(), key: z.string() };

const entrySchema = z.discriminatedUnion('kind', [
  /** A run began. */
  z.looseObject({ v: z.literal(logVersion), time: z.string(), kind: z.literal('run'), folder: z.string() }),
  /** A frame's file is about to be written there: from now on the file is ours. */
  z.looseObject({ ...frameBase, kind: z.literal('begun'), output: z.string() }),
  /** It is written, whole. */
  z.looseObject({
    ...frameBase,
    kind: z.literal('painted'),
    output: z.string(),
    sha256: z.string(),
    pixelsSha256: z.string(),
    figures: z.unknown(),
    reason: z.string(),
  }),
  z.looseObject({ ...frameBase, kind: z.literal('failed'), reason: z.string() }),
]);

export type RunEntry = z.infer<typeof entrySchema>;
export type PaintedEntry = Extract<RunEntry, { kind: 'painted' }>;
type Unstamped<Entry> = Entry extends unknown ? Omit<Entry, 'v' | 'time'> : never;

const logName = /^run(-\d+of\d+)?\.oxgall\.jsonl$/;

/** Name of a run's log in its output folder. */
export function runLogName(shard: { index: number; count: number } | null): string {
  return shard ? `run-${shard.index}of${shard.count}.oxgall.jsonl` : 'run.oxgall.jsonl';
}

/**
 * Reads every log of an output folder, in the order of time. Lines that are torn, as a kill leaves the last one, or not
 * understood are passed over.
 */
export async function readRunLogs(folder: string): Promise<RunEntry[]> {
  const names = (await readdir(folder).catch(() => [] as string[])).filter((name) => logName.test(name));
  const texts = await Promise.all(names.map((name) => readFile(join(folder, name), 'utf8').catch(() => '')));
  const entries = texts.flatMap((text) => text.split('\n').flatMap(readLine));
  return entries.sort((one, other) => (one.time < other.time ? -1 : one.time > other.time ? 1 : 0));
}

function readLine(line: string): RunEntry[] {
  try {
    const read = entrySchema.safeParse(JSON.parse(line));
    return read.success ? [read.data] : [];
  } catch {
    return [];
  }
}

/** The log of one run: lines are only ever added, each on the disk before the call returns. */
export class RunLog {
  #writing: Promise<unknown> = Promise.resolve();
  #lastMs = 0;

  private constructor(private readonly file: FileHandle) {}

  /** @throws FileError where it cannot be written */
  static async open(folder: string, name: string): Promise<RunLog> {
    const path = join(folder, name);
    try {
      const file = await open(path, 'a+');
      const { size } = await file.stat();
      const last = Buffer.alloc(1);
      // A torn last line must not run into the next one.
      if (size > 0) await file.read(last, 0, 1, size - 1);
      if (size > 0 && last[0] !== 0x0a) await file.appendFile('\n');
      await flushFolder(folder);
      return new RunLog(file);
    } catch (failure) {
      throw fileErrorFrom(path, failure);
    }
  }

  append(entry: Unstamped<RunEntry>): Promise<void> {
    // Times that never repeat keep the order of entries across logs.
    this.#lastMs = Math.max(Date.now(), this.#lastMs + 1);
    const time = new Date(this.#lastMs).toISOString();
    const line = `${JSON.stringify({ v: logVersion, time, ...entry })}\n`;
    const written = this.#writing.then(async () => {
      await this.file.appendFile(line);
      await this.file.datasync();
    });
    this.#writing = written.catch(() => undefined);
    return written;
  }

  async close(): Promise<void> {
    await this.#writing;
    await this.file.close();
  }
}
