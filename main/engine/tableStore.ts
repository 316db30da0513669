import type { Kernels } from '../../core/kernels/module.ts';
import type { BodyPlan } from '../../core/pipeline/bodyPlan.ts';
import type { SharedHeap } from './sharedHeap.ts';
import type { WorkerPool } from './workerPool.ts';

/** Byte offsets of what the paint kernels read besides pixels. */
export interface Tables {
  bank: number;
  mergeTable: number;
  gaussianTable: number;
}

/** Banks kept: the plans of one photo at its few preview levels share theirs. */
const banksKept = 6;

/** Builds tables in the shared memory and keeps the last few: a bank takes some ten milliseconds. */
export class TableStore {
  readonly #banks = new Map<string, { pointer: number; bytes: number }>();
  #fixed: { mergeTable: number; gaussianTable: number } | null = null;

  constructor(
    readonly pool: WorkerPool,
    readonly heap: SharedHeap,
    readonly kernels: Kernels,
  ) {}

  /** The tables of a plan for tiles of one row stride. */
  async get(plan: BodyPlan, strideElements: number, signal?: AbortSignal): Promise<Tables> {
    const fixed = await this.#fixedTables();
    return { ...fixed, bank: await this.#bankFor(plan, strideElements, signal) };
  }

  async #fixedTables() {
    if (this.#fixed) return this.#fixed;
    const tables = { mergeTable: this.heap.allocate(9 * 16), gaussianTable: this.heap.allocate(64) };
    await this.#build({ radiusPx: 0, pull: 0, strideElements: 0, bank: 0, ...tables }, 0);
    this.#fixed = tables;
    return tables;
  }

  async #bankFor(plan: BodyPlan, strideElements: number, signal?: AbortSignal): Promise<number> {
    if (plan.method === 'quadrant') return 0;
    const { radiusPx, pull } = plan;
    const isBilateral = plan.method === 'bilateral';
    const key = isBilateral ? `bilateral ${radiusPx}` : `${radiusPx} ${pull} ${strideElements}`;
    const found = this.#banks.get(key);
    if (found) {
      this.#banks.delete(key);
      this.#banks.set(key, found);
      return found.pointer;
    }
    const bytes = isBilateral
      ? this.kernels.bilateralTableBytes(radiusPx)
      : this.kernels.bankBytes(radiusPx, pull);
    const pointer = this.heap.allocate(bytes);
    if (!isBilateral) {
      const build = { radiusPx, pull, strideElements, bank: pointer, mergeTable: 0, gaussianTable: 0 };
      try {
        await this.#build(build, this.kernels.bankScratchBytes(radiusPx, pull), signal);
      } catch (error) {
        this.heap.free(pointer);
        throw error;
      }
    }
    this.#banks.set(key, { pointer, bytes });
    return pointer;
  }

  /** Called between paintings: drops the banks that have not been used for longest. */
  trim(): void {
    for (const [key, { pointer }] of this.#banks) {
      if (this.#banks.size <= banksKept) break;
      this.#banks.delete(key);
      this.heap.free(pointer);
    }
  }

  #build(
    tables: Tables & { radiusPx: number; pull: number; strideElements: number },
    scratchBytes: number,
    signal?: AbortSignal,
  ) {
    const grid = { xPx: 0, yPx: 0, widthPx: 1, heightPx: 1, tileWidthPx: 1, tileHeightPx: 1 };
    return this.pool.run({ kind: 'tables', grid, ...tables }, { scratchBytes, signal });
  }
}
