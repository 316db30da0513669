import { type FileHandle, open, readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { z } from 'zod';
import type { Shard } from '../../core/series/shards.ts';
import { FileError } from '../files/fileError.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { flushFolder } from '../host/flushFolder.ts';

/** The newest version of the log that is read and written here. */
const logVersion = 1;

const base = { v: z.literal(logVersion), time: z.string() };
const frameBase = { ...base, name: z.string(), key: z.string() };
const fileBase = {
  ...frameBase,
  output: z.string(),
  /** Of the file's bytes. */
  sha256: z.string(),
  pixelsSha256: z.string(),
  /** File or folder of the strata, where they were asked for. */
  layers: z.string().optional(),
  /** Of the strata: see `hashStrata`. */
  layersSha256: z.string().optional(),
  /** Ids of what the job is made of. */
  parts: z.record(z.string(), z.string()),
  figures: z.unknown(),
  /** What it was painted by, and what there was to say of it, in words; older logs lack both. */
  preset: z.string().optional(),
  remarks: z.array(z.string()).optional(),
};

const entrySchema = z.discriminatedUnion('kind', [
  /** A run began. */
  z.looseObject({ ...base, kind: z.literal('run'), folder: z.string() }),
  /** A frame is being painted. */
  z.looseObject({ ...frameBase, kind: z.literal('begun'), output: z.string() }),
  /** Its file is whole and about to take its name: a file of those bytes under that name is ours. */
  z.looseObject({ ...fileBase, kind: z.literal('written') }),
  /** It has its name. */
  z.looseObject({ ...fileBase, kind: z.literal('painted'), reason: z.string() }),
  z.looseObject({ ...frameBase, kind: z.literal('failed'), reason: z.string() }),
]);

export type RunEntry = z.infer<typeof entrySchema>;
/** A line about a file that is ours. */
export type FileEntry = Extract<RunEntry, { kind: 'written' | 'painted' }>;
type Unstamped<Entry> = Entry extends unknown ? Omit<Entry, 'v' | 'time'> : never;

const logName = /^run(-\d+of\d+)?\.oxgall\.jsonl$/;

/** Name of a run's log in its output folder. */
export function runLogName(shard: Shard | null): string {
  return shard ? `run-${shard.index}of${shard.count}.oxgall.jsonl` : 'run.oxgall.jsonl';
}

/**
 * Reads every log of an output folder, in the order of time. Lines that are torn, as a kill leaves the last one, or not
 * understood are passed over.
 * @throws FileError where a newer version wrote a log: going on would paint again what it knows to be painted
 */
export async function readRunLogs(folder: string): Promise<RunEntry[]> {
  const names = (await readdir(folder).catch(() => [] as string[])).filter((name) => logName.test(name));
  const entries: RunEntry[] = [];
  for (const name of names.sort()) {
    const path = join(folder, name);
    const text = await readFile(path, 'utf8').catch((failure) => {
      throw fileErrorFrom(path, failure);
    });
    for (const line of text.split('\n')) {
      const entry = readLine(line, path);
      if (entry) entries.push(entry);
    }
  }
  return entries.sort((one, other) => (one.time < other.time ? -1 : one.time > other.time ? 1 : 0));
}

function readLine(line: string, path: string): RunEntry | null {
  let value: unknown;
  try {
    value = JSON.parse(line);
  } catch {
    return null;
  }
  const version = typeof value === 'object' && value !== null && 'v' in value ? value.v : null;
  if (typeof version === 'number' && version > logVersion)
    throw new FileError(path, 'was written by a newer version', 'Update Oxgall, or choose another folder.');
  const read = entrySchema.safeParse(value);
  return read.success ? read.data : null;
}

/** The log of one run: lines are only ever added, each on the disk before the call returns. */
export class RunLog {
  #writing: Promise<unknown> = Promise.resolve();
  #lastMs = 0;

  private constructor(
    private readonly path: string,
    private readonly file: FileHandle,
    private isTorn: boolean,
  ) {}

  /** @throws FileError where it cannot be written */
  static async open(folder: string, name: string): Promise<RunLog> {
    const path = join(folder, name);
    try {
      const file = await open(path, 'a+');
      const { size } = await file.stat();
      const last = Buffer.alloc(1);
      if (size > 0) await file.read(last, 0, 1, size - 1);
      await flushFolder(folder);
      return new RunLog(path, file, size > 0 && last[0] !== 0x0a);
    } catch (failure) {
      throw fileErrorFrom(path, failure);
    }
  }

  /** @throws FileError where it cannot be written; the lines before stay whole */
  append(entry: Unstamped<RunEntry>): Promise<void> {
    // Times that never repeat keep the order of entries across logs.
    this.#lastMs = Math.max(Date.now(), this.#lastMs + 1);
    const time = new Date(this.#lastMs).toISOString();
    const line = `${JSON.stringify({ v: logVersion, time, ...entry })}\n`;
    const written = this.#writing.then(async () => {
      // A torn line, from a kill or a full disk, must not run into the next one.
      const text = this.isTorn ? `\n${line}` : line;
      this.isTorn = true;
      try {
        await this.file.appendFile(text);
        await this.file.datasync();
      } catch (failure) {
        throw fileErrorFrom(this.path, failure);
      }
      this.isTorn = false;
    });
    this.#writing = written.catch(() => undefined);
    return written;
  }

  async close(): Promise<void> {
    await this.#writing;
    await this.file.close();
  }
}
