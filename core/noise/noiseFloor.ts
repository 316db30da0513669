/** What the noise kernel counted on a photo. Records of several bands are summed field by field. */
export interface NoiseRecord {
  /** How often |I∗N| of the luma lay in each bin. */
  bins: Uint32Array;
  /** Exact sum of |I∗N|, in 1/4096 of a sample step. */
  sum: bigint;
  /** Pixels counted. */
  count: bigint;
}

/** Bins of a record: 0…32768, centred on multiples of 1/16 of an 8-bit step. */
export const noiseBinCount = 32769;
/** Bytes of a record in the kernels' memory: bins (u32), four bytes unused, sum and count (u64). */
export const noiseRecordBytes = ((noiseBinCount * 4 + 7) & ~7) + 16;

/** Bins a whole 8-bit step is wide. */
const binsPerStep = 16;
/** √(Σ N²): what white noise of σ 1 has grown to in I∗N. */
const gain = 6;
/** Median of |z| for a normal z. */
const normalMedian = 0.67449;

/**
 * Reads a record out of the kernels' memory.
 * @param buffer the memory, shared or not; copied, not modified
 * @param pointer where the record begins, 8-aligned
 */
export function readNoiseRecord(buffer: ArrayBufferLike, pointer: number): NoiseRecord {
  const totals = new BigUint64Array(buffer, pointer + noiseRecordBytes - 16, 2);
  return {
    bins: new Uint32Array(buffer, pointer, noiseBinCount).slice(),
    sum: totals[0],
    count: totals[1],
  };
}

/**
 * Adds the records of several bands, in any order.
 * @param records not modified
 */
export function sumNoiseRecords(records: readonly NoiseRecord[]): NoiseRecord {
  const total: NoiseRecord = { bins: new Uint32Array(noiseBinCount), sum: 0n, count: 0n };
  for (const record of records) {
    for (let i = 0; i < noiseBinCount; i++) total.bins[i] += record.bins[i];
    total.sum += record.sum;
    total.count += record.count;
  }
  return total;
}

/** One bin in encoded units 0…1: 1/16 of an 8-bit step, or 16 of the 65535 steps of 16 bits. */
function binWidth(bytesPerSample: 1 | 2): number {
  return bytesPerSample === 1 ? 1 / (binsPerStep * 255) : binsPerStep / 65535;
}

/**
 * Median of |I∗N| in bins, unrounded. A bin's counts are spread half-way to the occupied bins beside it (8-bit
 * greys fill only every sixteenth bin), but never further than half an 8-bit step.
 */
function medianBin(record: NoiseRecord): number {
  const half = Number(record.count) / 2;
  const reach = binsPerStep / 2;
  let below = 0;
  let previous = -1;
  for (let bin = 0; bin < noiseBinCount; bin++) {
    const here = record.bins[bin];
    if (here === 0) continue;
    if (below + here >= half) {
      let next = bin + 1;
      while (next < noiseBinCount && record.bins[next] === 0) next++;
      const low = bin === 0 ? 0 : previous < 0 ? bin - reach : Math.max(bin - reach, (previous + bin) / 2);
      const high = next === noiseBinCount ? bin + reach : Math.min(bin + reach, (bin + next) / 2);
      return low + ((half - below) / here) * (high - low);
    }
    below += here;
    previous = bin;
  }
  return 0;
}

/**
 * Standard deviation of the luma's noise, robust form of Immerkær's estimate (CVIU 64(2), 1996):
 * median|I∗N| / (6·0.67449). Edges and texture hardly move it. It is the deviation that the pixels have: rounding
 * to 8 bits counts as noise of its own (σ = 1/√12 of a step). A photo that is exactly flat has none.
 * @param record of the whole photo; not modified
 * @returns σ in encoded units 0…1; 0 for a photo of fewer than 3 × 3 pixels
 */
export function noiseSigma(record: NoiseRecord, bytesPerSample: 1 | 2): number {
  if (record.count === 0n || record.bins[0] === Number(record.count)) return 0;
  return (medianBin(record) * binWidth(bytesPerSample)) / (gain * normalMedian);
}

/**
 * The mean form of the same estimate: √(π/2) / (6(W−2)(H−2)) · Σ|I∗N|, exact. Edges and texture raise it.
 * @param record of the whole photo; not modified
 * @returns σ in encoded units 0…1
 */
export function noiseSigmaOfMean(record: NoiseRecord, bytesPerSample: 1 | 2): number {
  if (record.count === 0n) return 0;
  const steps = bytesPerSample === 1 ? 255 : 65535;
  const mean = Number(record.sum) / Number(record.count) / (4096 * steps);
  return (Math.sqrt(Math.PI / 2) / gain) * mean;
}
