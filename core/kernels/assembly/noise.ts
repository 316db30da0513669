// Noise of a photo (J. Immerkær, CVIU 64(2), 1996): how large |I∗N| is, N = [[1,−2,1],[−2,4,−2],[1,−2,1]],
// which planes and slopes leave at 0. Whole numbers throughout: bands may be counted in any order.

/**
 * Luma weights of ITU-R BT.709 in 1/4096. |I∗N| ≤ 8·65535·4096, which a signed 32-bit number just holds.
 */
const red: i32 = 871;
const green: i32 = 2929;
const blue: i32 = 296;

/** A bin is 1/16 of an 8-bit step, or 16 of 65535: this many bits of |I∗N| are rounded away. */
const binBits8: i32 = 8;
const binBits16: i32 = 16;

/** Bins 0…32768. */
const binCount: i32 = 32769;

/**
 * Bytes of the record that {@link noiseHistogram} adds to: the bins (u32), four bytes unused, then the exact
 * sum of |I∗N| in 1/4096 of a sample step and the number of pixels (two u64). Clear it before the first band.
 */
export function noiseRecordBytes(): i32 {
  return ((binCount * 4 + 7) & -8) + 16;
}

// @ts-ignore: decorator
@inline
function sample(at: usize, isWide: bool): i32 {
  return isWide ? <i32>load<u16>(at) : <i32>load<u8>(at);
}

/** Vertical half of N at one sample: above − 2·here + below. */
// @ts-ignore: decorator
@inline
function bend(at: usize, rowBytes: usize, isWide: bool): i32 {
  return sample(at - rowBytes, isWide) - 2 * sample(at, isWide) + sample(at + rowBytes, isWide);
}

/** The same of the luma of one pixel. */
// @ts-ignore: decorator
@inline
function lumaBend(at: usize, rowBytes: usize, isWide: bool): i32 {
  const step: usize = isWide ? 2 : 1;
  return red * bend(at, rowBytes, isWide) + green * bend(at + step, rowBytes, isWide) + blue * bend(at + 2 * step, rowBytes, isWide);
}

/** One row; `isWide` is known where this is inlined, so each depth gets a loop of its own. */
// @ts-ignore: decorator
@inline
function countRow(row: usize, rowBytes: usize, pixelBytes: usize, widthPx: i32, isWide: bool, bins: usize): u64 {
  const bits = isWide ? binBits16 : binBits8;
  const half = <u32>1 << (bits - 1);
  let sum: u64 = 0;
  let before = lumaBend(row, rowBytes, isWide);
  let here = lumaBend(row + pixelBytes, rowBytes, isWide);
  let at = row + 2 * pixelBytes;
  for (let x = 1; x < widthPx - 1; x++, at += pixelBytes) {
    const after = lumaBend(at, rowBytes, isWide);
    const size = <u32>abs<i32>(before - 2 * here + after);
    const bin = bins + (<usize>((size + half) >> bits) << 2);
    store<u32>(bin, load<u32>(bin) + 1);
    sum += <u64>size;
    before = here;
    here = after;
  }
  return sum;
}

/**
 * Counts |I∗N| of the photo's luma over rows fromRow … toRow − 1. The outermost rows and columns of the
 * picture are left out, wherever the band lies.
 * @param pixels the whole photo, interleaved, rows without padding; alpha is not looked at
 * @param channels 3 or 4
 * @param bytesPerSample 1 or 2
 * @param record {@link noiseRecordBytes}, 8-aligned, added to; bands counted into several records may be summed
 */
export function noiseHistogram(
  pixels: usize, widthPx: i32, heightPx: i32, channels: i32, bytesPerSample: i32, fromRow: i32, toRow: i32, record: usize,
): void {
  const first = max(1, fromRow);
  const end = min(heightPx - 1, toRow);
  if (widthPx < 3 || first >= end) return;
  const pixelBytes = <usize>(channels * bytesPerSample);
  const rowBytes = <usize>widthPx * pixelBytes;
  let sum: u64 = 0;
  for (let y = first; y < end; y++) {
    const row = pixels + <usize>y * rowBytes;
    if (bytesPerSample == 2) sum += countRow(row, rowBytes, pixelBytes, widthPx, true, record);
    else sum += countRow(row, rowBytes, pixelBytes, widthPx, false, record);
  }
  const totals = record + <usize>((binCount * 4 + 7) & -8);
  store<u64>(totals, load<u64>(totals) + sum);
  store<u64>(totals, load<u64>(totals, 8) + <u64>(end - first) * <u64>(widthPx - 2), 8);
}
