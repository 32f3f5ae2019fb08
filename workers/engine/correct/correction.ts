import type { Tail } from '../plan';
import type { Axes, Cluster, CorrectionOutcome, RunMaps } from '../types';
import type { NullPart } from './part';

/** The maps and distributions that a claim rests on: what the server needs to draw it again. */
export type ClaimMaps = Pick<
  RunMaps,
  | 'observedA'
  | 'observedB'
  | 'lagA'
  | 'lagB'
  | 'nullSd'
  | 'z'
  | 'upper'
  | 'lower'
  | 'maxStatistic'
  | 'maxClusterMass'
  | 'parts'
>;

/** What a correction judges. */
export interface Evidence {
  axes: Axes;
  maps: ClaimMaps;
  tail: Tail;
  alpha: number;
  clusterFormingZ: number;
  permutations: number;
  /** p of each feature by tail, f64. */
  p: Float64Array;
  /** Observed clusters of the tail's signs, largest mass first. */
  clusters: Cluster[];
}

/**
 * A correction over all features of a plan. Adding one is a file and a line in
 * correct/registry.ts.
 */
export interface Correction<Id extends string = string> {
  id: Id;
  name: string;
  /** What is kept at alpha. */
  family: 'family-wise' | 'false discovery';
  /** Of false discovery: what p is multiplied by, for a number of tests. */
  inflation?: (tests: number) => number;
  /** One sentence for hover and focus. */
  sentence: string;
  /** What a claim under it does not say, for screens and exports; null where nothing is to add. */
  caution: string | null;
  source: string;
  /** What each permutation's maximum is a maximum of; null where none stands behind the claim. */
  statistic: string | null;
  /** What it needs of every permutation beyond what each run keeps; null where that is enough. */
  part: NullPart | null;
  judge(evidence: Evidence): CorrectionOutcome;
}
