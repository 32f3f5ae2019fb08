/** What workers/kernels/wasm/index.ts exports: arrays are handed over as addresses in bytes. */
export interface KernelExports extends WebAssembly.Exports {
  memory: WebAssembly.Memory;
  heapBase(): number;
  crossLanes(
    j: number,
    k: number,
    terms: number,
    epochCount: number,
    samplesPerEpoch: number,
    first: number,
    count: number,
  ): void;
  siteLanes(
    phasors: number,
    lanes: number,
    epochCount: number,
    samplesPerEpoch: number,
    first: number,
    count: number,
  ): void;
  sumLanes(terms: number, sums: number, from: number, to: number): void;
  sumLabelledLanes(
    terms: number,
    offsets: number,
    table: number,
    sums: number,
    epochCount: number,
    rows: number,
  ): void;
  sumShuffledLanes(
    j: number,
    k: number,
    order: number,
    sums: number,
    rows: number,
    epochCount: number,
  ): void;
  resultantDifferences(
    sums: number,
    total: number,
    values: number,
    rows: number,
    perEpochA: number,
    perEpochB: number,
  ): void;
  resultantsOfLanes(sums: number, values: number, rows: number, perEpoch: number): void;
  standardisedDifferences(
    a: number,
    b: number,
    meanA: number,
    inverseA: number,
    meanB: number,
    inverseB: number,
    rows: number,
  ): void;
  addGroupMoments(
    values: number,
    origin: number,
    sum: number,
    squares: number,
    upperFrom: number,
    lowerTo: number,
    upper: number,
    lower: number,
    rows: number,
    start: number,
  ): void;
  standardiseGroup(
    values: number,
    center: number,
    inverse: number,
    rest: number,
    z: number,
    rows: number,
  ): void;
  addGroupMaps(
    values: number,
    center: number,
    inverse: number,
    rest: number,
    beyond: number,
    counts: number,
    positive: number,
    negative: number,
    best: number,
    histogram: number,
    rows: number,
    stride: number,
    bitStride: number,
    features: number,
    formingZ: number,
    tailSign: number,
    binCount: number,
    binsPerUnit: number,
    binOffset: number,
    mayFill: number,
  ): void;
  addClusterMasses(
    beyond: number,
    positive: number,
    negative: number,
    masses: number,
    scratch: number,
    rows: number,
    frequencyCount: number,
    timeCount: number,
    stride: number,
    bitStride: number,
    tailSign: number,
  ): void;
}
