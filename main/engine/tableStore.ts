import type { Kernels } from '../../core/kernels/module.ts';
import type { BodyPlan } from '../../core/pipeline/bodyPlan.ts';
import type { TablesJob } from '../../core/pipeline/jobs.ts';
import type { SharedHeap } from './sharedHeap.ts';
import type { WorkerPool } from './workerPool.ts';

/** Byte offsets of what the paint kernels read besides pixels. */
export interface Tables {
  bank: number;
  mergeTable: number;
  gaussianTable: number;
  bilateralEntries: number;
}

interface Bank {
  pointer: number;
  entries: number;
}

/** Banks kept: the plans of one photo at its few preview levels share theirs. */
const banksKept = 6;

/** Builds tables in the shared memory and keeps the last few: a bank takes some ten milliseconds. */
export class TableStore {
  readonly #banks = new Map<string, Bank>();
  #fixed: { mergeTable: number; gaussianTable: number } | null = null;

  constructor(
    readonly pool: WorkerPool,
    readonly heap: SharedHeap,
    readonly kernels: Kernels,
  ) {}

  /**
   * The tables of a plan for tiles of one row stride.
   * @param isFixedPoint whether the bank is for the fixed-point smoothing
   */
  async get(
    plan: BodyPlan,
    strideElements: number,
    isFixedPoint: boolean,
    signal?: AbortSignal,
  ): Promise<Tables> {
    const fixed = await this.#fixedTables();
    if (plan.method === 'quadrant') return { ...fixed, bank: 0, bilateralEntries: 0 };
    const { pointer, entries } =
      plan.method === 'bilateral'
        ? this.#bilateralTable(plan)
        : await this.#bankFor(plan, strideElements, isFixedPoint, signal);
    return { ...fixed, bank: pointer, bilateralEntries: entries };
  }

  async #fixedTables() {
    if (this.#fixed) return this.#fixed;
    const tables = { mergeTable: this.heap.allocate(9 * 16), gaussianTable: this.heap.allocate(64) };
    const noBank = { radiusPx: 0, pull: 0, strideElements: 0, isFixedPoint: false, bank: 0 };
    await this.#build({ ...noBank, ...tables }, 0);
    this.#fixed = tables;
    return tables;
  }

  /** A few hundred numbers: made on this thread. */
  #bilateralTable({ radiusPx }: BodyPlan): Bank {
    const key = `bilateral ${radiusPx}`;
    const found = this.#recall(key);
    if (found) return found;
    const pointer = this.heap.allocate(this.kernels.bilateralTableBytes(radiusPx));
    const bank = { pointer, entries: this.kernels.bilateralTable(radiusPx, pointer) };
    this.#banks.set(key, bank);
    return bank;
  }

  async #bankFor(
    plan: BodyPlan,
    strideElements: number,
    isFixedPoint: boolean,
    signal?: AbortSignal,
  ): Promise<Bank> {
    const { radiusPx, pull } = plan;
    const key = `${radiusPx} ${pull} ${strideElements} ${isFixedPoint}`;
    const found = this.#recall(key);
    if (found) return found;
    const pointer = this.heap.allocate(this.kernels.bankBytes(radiusPx, pull));
    const tables = { bank: pointer, mergeTable: 0, gaussianTable: 0 };
    try {
      const scratchBytes = this.kernels.bankScratchBytes(radiusPx, pull);
      await this.#build({ radiusPx, pull, strideElements, isFixedPoint, ...tables }, scratchBytes, signal);
    } catch (error) {
      this.heap.free(pointer);
      throw error;
    }
    // Two paintings may have built the same bank at once: keep the first.
    const first = this.#banks.get(key);
    if (first) {
      this.heap.free(pointer);
      return first;
    }
    const bank = { pointer, entries: 0 };
    this.#banks.set(key, bank);
    return bank;
  }

  /** A bank that is there already, now the one used last. */
  #recall(key: string): Bank | undefined {
    const found = this.#banks.get(key);
    if (!found) return undefined;
    this.#banks.delete(key);
    this.#banks.set(key, found);
    return found;
  }

  /** Called between paintings: drops the banks that have not been used for longest. */
  trim(): void {
    for (const [key, { pointer }] of this.#banks) {
      if (this.#banks.size <= banksKept) break;
      this.#banks.delete(key);
      this.heap.free(pointer);
    }
  }

  #build(tables: Omit<TablesJob, 'kind' | 'grid'>, scratchBytes: number, signal?: AbortSignal) {
    const grid = { xPx: 0, yPx: 0, widthPx: 1, heightPx: 1, tileWidthPx: 1, tileHeightPx: 1 };
    return this.pool.run({ kind: 'tables', grid, ...tables }, { scratchBytes, signal });
  }
}
