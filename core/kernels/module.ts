/**
 * The kernels' module, loaded over a memory that its users share. Names and argument orders are those of
 * core/kernels/assembly; pointers are byte offsets into the memory.
 */
export interface Kernels {
  photoToQuads(
    src: number,
    pictureWidth: number,
    pictureHeight: number,
    channels: number,
    bytesPerSample: number,
    x0: number,
    y0: number,
    width: number,
    height: number,
    dst: number,
    dstStride: number,
  ): void;
  quadsToTile(
    src: number,
    pictureWidth: number,
    pictureHeight: number,
    x0: number,
    y0: number,
    width: number,
    height: number,
    dst: number,
    dstStride: number,
  ): void;
  repeatEdges(
    tile: number,
    stride: number,
    x0: number,
    y0: number,
    width: number,
    height: number,
    pictureWidth: number,
    pictureHeight: number,
  ): void;
  tileToQuads(
    src: number,
    srcStride: number,
    width: number,
    height: number,
    dst: number,
    dstStride: number,
  ): void;
  tileToBody(
    src: number,
    srcStride: number,
    width: number,
    height: number,
    dst: number,
    dstStride: number,
  ): void;
  halveQuads(
    src: number,
    srcStride: number,
    width: number,
    height: number,
    dst: number,
    dstStride: number,
  ): void;
  quadsToGround(
    src: number,
    srcWidth: number,
    x0: number,
    y0: number,
    width: number,
    height: number,
    dst: number,
    dstStride: number,
    photo: number,
    photoWidth: number,
    photoHeight: number,
    channels: number,
    bytesPerSample: number,
    level: number,
  ): void;
  copyPlane(
    src: number,
    srcStride: number,
    width: number,
    height: number,
    dst: number,
    dstStride: number,
  ): void;
  quadrant(
    src: number,
    srcStride: number,
    width: number,
    height: number,
    radiusPx: number,
    scratch: number,
    dst: number,
    dstStride: number,
  ): void;
  quadrantScratchBytes(width: number, height: number, radiusPx: number): number;
  bilateral(
    src: number,
    srcStride: number,
    width: number,
    height: number,
    radiusPx: number,
    sigmaRange: number,
    table: number,
    entryCount: number,
    scratch: number,
    dst: number,
    dstStride: number,
  ): void;
  bilateralTable(radiusPx: number, table: number): number;
  bilateralTableBytes(radiusPx: number): number;
  bilateralScratchBytes(width: number, height: number, radiusPx: number): number;
  noiseHistogram(
    pixels: number,
    width: number,
    height: number,
    channels: number,
    bytesPerSample: number,
    fromRow: number,
    toRow: number,
    record: number,
  ): void;
  noiseRecordBytes(): number;
  gaussianTable(sigmaPx: number, radiusPx: number, table: number): void;
  gaussianColumns(
    src: number,
    srcStride: number,
    width: number,
    height: number,
    table: number,
    radiusPx: number,
    dst: number,
    dstStride: number,
  ): void;
  gaussianRows(
    src: number,
    srcStride: number,
    width: number,
    height: number,
    table: number,
    radiusPx: number,
    dst: number,
    dstStride: number,
  ): void;
  blockTensor(
    src: number,
    srcStride: number,
    blocksX: number,
    blocksY: number,
    e: number,
    f: number,
    g: number,
    dstStride: number,
  ): void;
  addCoarseTensor(
    e: number,
    f: number,
    g: number,
    stride: number,
    blocksX: number,
    blocksY: number,
    coarse: number,
    coarseWidth: number,
    coarseHeight: number,
    x0: number,
    y0: number,
  ): void;
  grainNumbers(
    e: number,
    f: number,
    g: number,
    stride: number,
    blocksX: number,
    blocksY: number,
    dst: number,
    dstStride: number,
  ): void;
  bankReachPx(radiusPx: number, pull: number): number;
  bankBytes(radiusPx: number, pull: number): number;
  bankScratchBytes(radiusPx: number, pull: number): number;
  buildBank(radiusPx: number, pull: number, strideElements: number, bank: number, scratch: number): number;
  sectorWeights(vx: number, vy: number, weights: number): number;
  grainWise(
    src: number,
    srcStride: number,
    blocksX: number,
    blocksY: number,
    numbers: number,
    numbersStride: number,
    bank: number,
    noiseFloor: number,
    crispness: number,
    scratch: number,
    dst: number,
    dstStride: number,
  ): void;
  packPairs(src: number, stride: number, width: number, height: number, dst: number): void;
  buildFixedBank(
    radiusPx: number,
    pull: number,
    strideElements: number,
    bank: number,
    scratch: number,
  ): number;
  grainWiseFixed(
    src: number,
    srcStride: number,
    blocksX: number,
    blocksY: number,
    numbers: number,
    numbersStride: number,
    bank: number,
    noiseFloor: number,
    crispness: number,
    scratch: number,
    dst: number,
    dstStride: number,
  ): void;
  clearNumbers(numbers: number, count: number): void;
  lumaFromBody(
    body: number,
    windowX: number,
    windowY: number,
    windowWidth: number,
    pictureWidth: number,
    pictureHeight: number,
    shift: number,
    x0: number,
    y0: number,
    width: number,
    height: number,
    dst: number,
    dstStride: number,
  ): void;
  lumaFromQuads(
    src: number,
    srcStride: number,
    width: number,
    height: number,
    dst: number,
    dstStride: number,
  ): void;
  lumaBlockTensor(
    src: number,
    srcStride: number,
    blocksX: number,
    blocksY: number,
    e: number,
    f: number,
    g: number,
    dstStride: number,
  ): void;
  grainVectors(
    e: number,
    f: number,
    g: number,
    stride: number,
    blocksX: number,
    blocksY: number,
    dst: number,
    dstStride: number,
  ): void;
  dogReachPx(sigmaPx: number): number;
  dogTableBytes(sigmaPx: number): number;
  dogTable(sigmaPx: number, p: number, table: number): void;
  dogAcross(
    src: number,
    srcStride: number,
    blocksX: number,
    blocksY: number,
    vectors: number,
    vectorsStride: number,
    table: number,
    reach: number,
    dst: number,
    dstStride: number,
  ): void;
  streamlineSteps(sigmaPx: number, stepPx: number): number;
  streamlineTable(sigmaPx: number, stepPx: number, steps: number, table: number): void;
  cellMinima(
    src: number,
    srcStride: number,
    width: number,
    height: number,
    cells: number,
    cellsX: number,
  ): void;
  streamlines(
    src: number,
    srcStride: number,
    areaWidth: number,
    areaHeight: number,
    margin: number,
    vectors: number,
    vectorsStride: number,
    cells: number,
    cellsX: number,
    cellsY: number,
    cellReach: number,
    threshold: number,
    blank: number,
    steps: number,
    table: number,
    dst: number,
    dstStride: number,
  ): void;
  inkCoverage(
    src: number,
    srcStride: number,
    srcWidth: number,
    srcHeight: number,
    originX: number,
    originY: number,
    shift: number,
    x0: number,
    y0: number,
    width: number,
    height: number,
    epsilon: number,
    phi: number,
    dst: number,
    dstStride: number,
  ): void;
  bristleNoise(
    x0: number,
    y0: number,
    width: number,
    height: number,
    side: number,
    dst: number,
    dstStride: number,
  ): void;
  addHeights(
    marks: number,
    marksStride: number,
    luma: number,
    lumaStride: number,
    width: number,
    height: number,
    markGain: number,
    lumaGain: number,
  ): void;
  lightHeights(
    heights: number,
    width: number,
    height: number,
    firstRow: number,
    rows: number,
    slope: number,
    bearingDegrees: number,
    shine: number,
    dst: number,
  ): void;
  raiseRelief(
    src: number,
    srcStride: number,
    srcWidth: number,
    srcHeight: number,
    originX: number,
    originY: number,
    shift: number,
    x0: number,
    y0: number,
    width: number,
    height: number,
    dst: number,
    dstStride: number,
  ): void;
  toneTableBytes(bytesPerSample: number): number;
  toneTables(bytesPerSample: number, table: number): void;
  toneMap(
    src: number,
    channels: number,
    bytesPerSample: number,
    count: number,
    settings: number,
    table: number,
    out: number,
  ): void;
  mergeTable(table: number): void;
  merge(
    fine: number,
    fineStride: number,
    coarse: number,
    coarseStride: number,
    blocksX: number,
    blocksY: number,
    table: number,
    rangeSigma: number,
    hold: number,
    dst: number,
    dstStride: number,
  ): void;
  compose(
    ground: number,
    groundBytes: number,
    groundChannels: number,
    body: number,
    line: number,
    relief: number,
    count: number,
    settings: number,
    mode: number,
    out: number,
    outBytes: number,
    outChannels: number,
  ): void;
}

/** Bytes of one page of WebAssembly memory. */
export const pageBytes = 65536;
/** 4 GiB: the most that the module can address; declared in the module, so memories must say the same. */
export const maximumPages = 65536;

/** A fresh memory that threads can share, ready for the module. */
export function createKernelMemory(initialPages = 64): WebAssembly.Memory {
  return new WebAssembly.Memory({ initial: initialPages, maximum: maximumPages, shared: true });
}

/**
 * Puts the compiled module over a memory. Each thread has its own instance over the shared memory.
 * @throws Error with the kernel's message where a kernel meets an impossible argument
 */
export async function instantiateKernels(
  module: WebAssembly.Module,
  memory: WebAssembly.Memory,
): Promise<Kernels> {
  const abort = (): never => {
    throw new Error('A kernel was called with arguments it cannot take');
  };
  const instance = await WebAssembly.instantiate(module, { env: { memory, abort } });
  return instance.exports as unknown as Kernels;
}
