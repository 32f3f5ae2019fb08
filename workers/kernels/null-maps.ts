import { clusterForest, joinClusters, releaseClusters, type ClusterForest } from './clusters';

/** What a pair's null maps are made with; constant over a run but for the moments. */
export interface NullMapSettings {
  featureCount: number;
  timeCount: number;
  /** 0 two-sided, 1 for A greater, -1 for B greater. */
  tailSign: -1 | 0 | 1;
  clusterFormingZ: number;
  binCount: number;
  binFrom: number;
  binWidth: number;
  /** Mean and sd of each feature's null; an sd of 0 makes z 0. */
  mean: Float64Array;
  sd: Float64Array;
}

/** What the null maps add to. */
export interface NullMapTotals {
  /** `histogram[feature * binCount + bin]`, kept at 65535 when full. */
  histogram: Uint16Array;
  /** Largest tail statistic and largest cluster mass of each permutation so far, over pairs. */
  maxStatistic: Float32Array;
  maxClusterMass: Float32Array;
}

export interface NullMapScratch {
  z: Float32Array;
  positive: Int32Array;
  negative: Int32Array;
  forest: ClusterForest;
}

export function newMapScratch(featureCount: number): NullMapScratch {
  return {
    z: new Float32Array(featureCount),
    positive: new Int32Array(featureCount),
    negative: new Int32Array(featureCount),
    forest: clusterForest(featureCount),
  };
}

/** A standardised value, rounded to f32: what z means everywhere. */
export function standardised(value: number, mean: number, sd: number): number {
  return sd === 0 ? 0 : Math.fround((value - mean) / sd);
}

/**
 * Turns a pair's surrogates into z maps and adds them to the null's histogram, its maxima over
 * features and its largest cluster masses.
 * Layout: `values[row * featureCount + f * timeCount + t]`, row 0 being permutation `firstRow`.
 * Mutates `totals`, overwrites `scratch`; allocates nothing.
 * Cost: a division and a bin a value, and the clusters' points.
 * Source: maximum statistic, Westfall and Young 1993; cluster mass, Maris and Oostenveld 2007.
 */
export function addNullMaps(
  values: Float32Array,
  rows: { first: number; count: number },
  settings: NullMapSettings,
  totals: NullMapTotals,
  scratch: NullMapScratch,
): void {
  const { featureCount, tailSign, clusterFormingZ, mean, sd } = settings;
  const { binCount, binFrom, binWidth } = settings;
  const { histogram, maxStatistic, maxClusterMass } = totals;
  const { z, positive, negative } = scratch;
  const lastBin = binCount - 1;
  let at = 0;
  for (let row = 0; row < rows.count; row++) {
    let highest = -Infinity;
    let lowest = Infinity;
    let positiveCount = 0;
    let negativeCount = 0;
    for (let x = 0; x < featureCount; x++, at++) {
      const value = standardised(values[at], mean[x], sd[x]);
      z[x] = value;
      if (value > highest) highest = value;
      if (value < lowest) lowest = value;
      if (value > clusterFormingZ) positive[positiveCount++] = x;
      else if (value < -clusterFormingZ) negative[negativeCount++] = x;
      let bin = Math.floor((value - binFrom) / binWidth);
      if (bin < 0) bin = 0;
      else if (bin > lastBin) bin = lastBin;
      const slot = x * binCount + bin;
      if (histogram[slot] < 65_535) histogram[slot]++;
    }
    const permutation = rows.first + row;
    const statistic =
      tailSign === 0 ? Math.max(highest, -lowest) : tailSign > 0 ? highest : -lowest;
    if (statistic > maxStatistic[permutation]) maxStatistic[permutation] = statistic;
    const above = tailSign < 0 ? 0 : largest(z, positive, positiveCount, settings, scratch);
    const below = tailSign > 0 ? 0 : largest(z, negative, negativeCount, settings, scratch);
    const mass = Math.max(above, below);
    if (mass > maxClusterMass[permutation]) maxClusterMass[permutation] = mass;
  }
}

function largest(
  z: Float32Array,
  points: Int32Array,
  pointCount: number,
  settings: NullMapSettings,
  scratch: NullMapScratch,
): number {
  if (pointCount === 0) return 0;
  const { timeCount } = settings;
  const mass = joinClusters(z, 0, points, scratch.forest, { pointCount, timeCount });
  releaseClusters(points, pointCount, scratch.forest);
  return mass;
}
