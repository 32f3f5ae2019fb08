import type { Plan } from '$engine';

/** What the result page is given, and what its parts hand to each other. */

/** The axes of every map of a run, as the engine's Axes. */
export interface ResultAxes {
  sites: string[];
  pairs: [number, number][];
  frequenciesHz: number[];
  timesS: number[];
}

/** A claimed region of one pair, under one correction. */
export interface ResultEdge {
  pair: number;
  fromHz: number;
  toHz: number;
  fromS: number;
  toS: number;
  peakHz: number;
  peakS: number;
  /** f * timeCount + t of the largest |z|. */
  peakPoint: number;
  points: number;
  observedA: number;
  observedB: number;
  difference: number;
  z: number;
  p: number;
  pLow: number;
  pHigh: number;
  adjustedP: number;
  /** Absent where the adjusted p is no single proportion. */
  adjustedPLow: number | null;
  adjustedPHigh: number | null;
  lagARad: number;
  lagBRad: number;
  /** Number of the cluster within the run, 1 the largest. */
  cluster: number | null;
}

/** One value a pair, in the order of the axes' pairs. */
export interface PairValues {
  z: Float32Array;
  adjustedP: Float32Array;
  /** Where the value stands, f * timeCount + t. */
  point: Int32Array;
}

/** The distribution of the maximum over all features, with what a correction does with it. */
export interface MaximumNull {
  /** The correction whose maxima these are. */
  kind: string;
  surrogates: Float32Array;
  mean: number;
  sd: number;
  /** Absent where the permutations are too few for anything to pass. */
  criticalValue: number | null;
}

export interface ResultCluster {
  number: number;
  pair: number;
  sign: -1 | 1;
  mass: number;
  size: number;
  exceedances: number;
  p: number;
}

export interface ResultRun {
  id: string;
  seed: string;
  engineVersion: string;
  digest: string;
  workerCount: number;
  startedBy: string;
  finishedAt: Date;
  epochsA: number;
  epochsB: number;
  lostEpochs: number;
  /** Smallest difference each correction would have passed; null where none can. */
  smallestDifference: Record<string, number | null>;
}

export interface ResultPlan {
  id: string;
  version: number;
  hash: string;
  reason: string | null;
  lockedAt: Date;
  lockedBy: string;
  body: Plan;
}
