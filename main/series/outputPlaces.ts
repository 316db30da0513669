import { createHash } from 'node:crypto';
import { lstat, rename, rm } from 'node:fs/promises';
import { basename, extname, join } from 'node:path';
import { foldName } from '../../core/series/outputNames.ts';
import { type LayersKind, layersBeside } from '../files/layers/writeLayers.ts';
import { fileErrorFrom } from '../files/systemErrors.ts';
import { flushFolder } from '../host/flushFolder.ts';
import { numbered, placeUnlessTaken } from '../host/placeFile.ts';
import { fingerprintPhoto } from '../store/photoFingerprint.ts';
import type { FileEntry, RunEntry } from './runLog.ts';
import type { PlannedFrame } from './seriesPlan.ts';
import { hashStrata } from './strataHash.ts';

/** Where a painting goes. */
export interface OutputPlace {
  path: string;
  /** A file of ours lies there and gives way. */
  replaces: boolean;
  /** What was found there and where it is now; null where there was nothing. */
  remark: string | null;
}

/**
 * Decides under which names paintings go into a folder. A file counts as ours only where the log has its very bytes
 * under that name; everything else, photos and links to them above all, is left as it is.
 */
export class OutputPlaces {
  /** By path: the frame it is of, and the bytes it may have. */
  readonly #ours = new Map<string, { frame: string; hashes: Set<string> }>();
  /** By path: the contents that strata of ours may have there. */
  readonly #ownLayers = new Map<string, Set<string>>();
  readonly #taken = new Map<string, string>();
  readonly #planned: ReadonlyMap<string, string>;

  /** @param frames of the whole series, also of other shards: their names stay free for them */
  constructor(
    private readonly folder: string,
    frames: readonly PlannedFrame[],
    entries: readonly RunEntry[],
  ) {
    this.#planned = new Map(frames.map(({ name, outputName }) => [foldName(outputName), name]));
    for (const entry of entries) if (entry.kind === 'written' || entry.kind === 'painted') this.note(entry);
  }

  /** A file of these bytes under this name is ours from now on. */
  note(entry: Pick<FileEntry, 'name' | 'output' | 'sha256' | 'layers' | 'layersSha256'>): void {
    const { name, output, sha256, layers, layersSha256 } = entry;
    const path = join(this.folder, output);
    const known = this.#ours.get(path);
    if (known?.frame === name) known.hashes.add(sha256);
    else this.#ours.set(path, { frame: name, hashes: new Set([sha256]) });
    if (layers === undefined) return;
    const at = join(this.folder, layers);
    const hashes = this.#ownLayers.get(at) ?? new Set();
    if (layersSha256) hashes.add(layersSha256);
    this.#ownLayers.set(at, hashes);
  }

  /** Keeps a name for the frame whose painting has it. */
  keep(frame: string, path: string): void {
    this.#taken.set(path, frame);
  }

  /** The name that a frame's painting would have if nothing is in its way. */
  wanted({ outputName }: PlannedFrame): string {
    return join(this.folder, outputName);
  }

  /**
   * Chooses a name that is free or whose file is this very frame's. Where another hand has changed that file, it is
   * put aside first.
   */
  async choose(frame: PlannedFrame): Promise<OutputPlace> {
    const wanted = this.wanted(frame);
    for (let number = 1; ; number++) {
      const path = numbered(wanted, number);
      const planned = this.#planned.get(foldName(basename(path)));
      const taken = this.#taken.get(path);
      if ((planned ?? frame.name) !== frame.name || (taken ?? frame.name) !== frame.name) continue;
      const found = await this.#find(frame, path);
      if (found === 'foreign') continue;
      this.keep(frame.name, path);
      const remark = found === 'changed' ? await this.#putAside(path) : null;
      return { path, replaces: found === 'ours', remark };
    }
  }

  async #find({ name }: PlannedFrame, path: string): Promise<'nothing' | 'ours' | 'changed' | 'foreign'> {
    const facts = await lstat(path).catch(() => null);
    if (!facts) return 'nothing';
    const owner = this.#ours.get(path);
    if (owner?.frame !== name) return 'foreign';
    const sha256 = facts.isFile() ? await hashOf(path) : null;
    return sha256 !== null && owner.hashes.has(sha256) ? 'ours' : 'changed';
  }

  /** Somebody may have worked on it. */
  async #putAside(path: string): Promise<string> {
    const extension = extname(path);
    const target = `${path.slice(0, path.length - extension.length)}.changed${extension}`;
    for (let number = 1; ; number++) {
      const aside = numbered(target, number);
      if (await lstat(aside).catch(() => null)) continue;
      await rename(path, aside);
      return `${basename(path)} was changed by another hand; it is kept as ${basename(aside)}.`;
    }
  }

  /**
   * Gives a finished part its name.
   * @returns false where somebody has taken the name meanwhile
   * @throws FileError
   */
  async place(part: string, { path, replaces }: OutputPlace): Promise<boolean> {
    try {
      if (replaces) await rename(part, path);
      else if (!(await placeUnlessTaken(part, path))) return false;
      await rm(part, { force: true });
      await flushFolder(this.folder);
      return true;
    } catch (failure) {
      throw fileErrorFrom(path, failure);
    }
  }

  /**
   * Where the strata of a painting go: beside it, in the place of our own earlier ones, never of others. Where another
   * hand has changed ours, they are put aside first.
   */
  async chooseLayers(painting: string, kind: LayersKind): Promise<{ path: string; remark: string | null }> {
    const wanted = layersBeside(painting, kind);
    for (let number = 1; ; number++) {
      const path = numbered(wanted, number);
      const found = await hashStrata(path);
      const own = this.#ownLayers.get(path);
      if (found === null || own?.has(found)) return { path, remark: null };
      if (own) return { path, remark: await this.#putAside(path) };
    }
  }

  /** Gives finished strata, a file or a folder, their name. */
  async placeLayers(part: string, path: string): Promise<void> {
    try {
      await rm(path, { recursive: true, force: true });
      await rename(part, path);
      await flushFolder(this.folder);
    } catch (failure) {
      throw fileErrorFrom(path, failure);
    }
  }
}

async function hashOf(path: string): Promise<string | null> {
  return fingerprintPhoto(path).then(
    ({ sha256 }) => sha256,
    () => null,
  );
}

/** A hidden name for what a frame's painter writes: the same one for the same job, whoever paints it and when. */
export function partPath(folder: string, run: string, key: string, output: string): string {
  const id = createHash('sha256').update(`${key}\n${output}`).digest('hex').slice(0, 24);
  return join(folder, `.${run}.${id}.part`);
}
