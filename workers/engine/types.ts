/**
 * The shapes that the stages hand to each other: read -> prepare -> phase -> null + measure ->
 * correct -> result set. All arrays are plain typed arrays, row-major, with the layout stated.
 */

/** A stretch of a recording without a gap. Times count from the header's start, seconds. */
export interface Segment {
  startS: number;
  durationS: number;
}

export interface ChannelFacts {
  /** The EDF label as it stands in the file. */
  label: string;
  /** The site it stands for ("Fc5." is FC5), or the trimmed label. Plans name sites. */
  site: string;
  unit: string;
  samplingRateHz: number;
  bad: boolean;
  /** On the unit sphere: x to the right ear, y to the nose, z up. */
  position: { x: number; y: number; z: number } | null;
}

export interface EventFacts {
  onsetS: number;
  durationS: number | null;
  label: string;
}

/** What is known of a recording without reading its samples. */
export interface RecordingFacts {
  sha256: string;
  name: string;
  segments: Segment[];
  channels: ChannelFacts[];
  events: EventFacts[];
}

export type Condition = 'a' | 'b';

/** One epoch that the metadata allow: the event that made it, and where its samples lie. */
export interface Epoch {
  condition: Condition;
  recording: string;
  onsetS: number;
  label: string;
  /** Index into the recording's segments. */
  segment: number;
  /** Sample of the event within its segment, i0 of numerics. */
  sample: number;
}

export type LossReason =
  'guard-leaves-recording' | 'crosses-gap' | 'above-limit' | 'flat' | 'by-hand';

/** An epoch that was left out, and why. `site` and `valueUv` say which site broke a limit. */
export interface LostEpoch {
  condition: Condition;
  recording: string;
  onsetS: number;
  label: string;
  reason: LossReason;
  site?: string;
  valueUv?: number;
}

/** The axes of every map of a run. */
export interface Axes {
  sites: string[];
  /** Indices into `sites`, j before k, in the plan's order. */
  pairs: [number, number][];
  frequenciesHz: number[];
  /** Times of the kept samples, seconds from the event. */
  timesS: number[];
  samplingRateHz: number;
}

/**
 * What a worker made of a block of neighbouring pairs. Maps are
 * [pair - firstPair][frequency][time]; distributions are [permutation].
 */
export interface PairBlock {
  firstPair: number;
  pairCount: number;
  observedA: Float32Array;
  observedB: Float32Array;
  /** Preferred lag arg m of each condition, radians. */
  lagA: Float32Array;
  lagB: Float32Array;
  nullMean: Float32Array;
  nullSd: Float32Array;
  z: Float32Array;
  /** #{s_p >= s} and #{s_p <= s}, ties within the stated tolerance. */
  upper: Uint32Array;
  lower: Uint32Array;
  /** Null of each feature in z units: [feature][bin], see `histogramBins`. */
  histogram: Uint16Array;
  /** max over the block's features of |z_p| (two-sided), z_p or -z_p (one-sided). */
  maxStatistic: Float32Array;
  /** Largest cluster mass over the block's pairs and the tail's signs. */
  maxClusterMass: Float32Array;
  /** What single corrections need besides, by their id: see correct/part.ts. */
  parts: Record<string, Float32Array>;
}

/** The merged maps and distributions of all pairs: a PairBlock with firstPair 0 and all pairs. */
export type RunMaps = PairBlock;

export interface Cluster {
  pair: number;
  sign: -1 | 1;
  mass: number;
  size: number;
  /** Indices f * timeCount + t within the pair's map. */
  points: number[];
  /** #{permutations whose largest mass is at least this}. */
  exceedances: number;
  p: number;
}

/** One claimed region of one pair, under one correction. */
export interface Edge {
  correction: string;
  pair: number;
  fromHz: number;
  toHz: number;
  fromS: number;
  toS: number;
  /** f * timeCount + t of the largest |z|. */
  peakPoint: number;
  points: number;
  observedA: number;
  observedB: number;
  difference: number;
  z: number;
  /** Uncorrected p at the peak, with its 95 % Clopper-Pearson interval. */
  p: number;
  pInterval: [number, number];
  adjustedP: number;
  /** Absent for Benjamini-Hochberg, whose adjusted p is no single proportion. */
  adjustedPInterval: [number, number] | null;
  lagARad: number;
  lagBRad: number;
  /** Index into the outcome's clusters, for cluster corrections. */
  cluster: number | null;
}

/** What a correction says over all features. */
export interface CorrectionOutcome {
  id: string;
  /** Adjusted p of each feature [pair][frequency][time]; 1 where nothing is claimed. */
  adjustedP: Float32Array;
  edges: Edge[];
  /** Smallest |z| (or mass) that would have passed; null where none can (too few permutations). */
  criticalValue: number | null;
  /** The same for z as a difference at the median null sd, to say what could have been found. */
  smallestDifference: number | null;
}

export interface Outcome {
  corrections: CorrectionOutcome[];
  clusters: Cluster[];
  /** p of each feature by the plan's tail. */
  p: Float32Array;
  /** Features whose null has no spread: z = 0 and p = 1 by policy (nullSd is exactly 0 there). */
  degenerateFeatures: number;
  digest: string;
}
