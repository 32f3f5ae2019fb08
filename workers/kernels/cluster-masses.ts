import { clusterForest, joinClusters, releaseClusters, type ClusterForest } from './clusters';
import type { NullMapRows, NullMapShape } from './group-maps';

/** Elements of f64 that the compiled kernel joins runs in: four arrays of at most T / 2 runs a row. */
export function clusterScratchLength(frequencyCount: number, timeCount: number): number {
  return Math.ceil(2.5 * frequencyCount * Math.ceil(timeCount / 2)) + 2;
}

/**
 * Raises each row's largest cluster mass to that of its null map: sum of |z| over neighbouring
 * points beyond the forming threshold, positive and negative apart, of the tail's signs.
 * Layout: see `NullMapRows`; points are f * timeCount + t; `masses[row]`.
 * Mutates `masses`, overwrites the scratch, which only the compiled twin needs; mass is summed in f64, rounded once; the order of the sum
 * may differ between compiled and plain, and with it the last bit.
 * Cost: the rows' words of bits, and a few steps a run of marked points.
 * Source: Maris and Oostenveld 2007.
 */
export function addClusterMasses(
  rows: NullMapRows,
  masses: Float32Array,
  _scratch: Float64Array,
  map: { rows: number; frequencyCount: number; timeCount: number; shape: NullMapShape },
): void {
  const { frequencyCount, timeCount, shape } = map;
  const featureCount = frequencyCount * timeCount;
  const forest = clusterForest(featureCount);
  const points = new Int32Array(featureCount);
  for (let row = 0; row < map.rows; row++) {
    const at = { z: row * shape.stride, bits: row * shape.bitStride };
    for (const bits of signsOf(rows, shape.tailSign)) {
      const mass = largest(rows.z, bits, at, { points, forest, featureCount, timeCount });
      if (mass > masses[row]) masses[row] = mass;
    }
  }
}

function signsOf(rows: NullMapRows, tailSign: -1 | 0 | 1): Uint8Array[] {
  if (tailSign > 0) return [rows.positive];
  return tailSign < 0 ? [rows.negative] : [rows.positive, rows.negative];
}

function largest(
  z: Float32Array,
  bits: Uint8Array,
  at: { z: number; bits: number },
  work: { points: Int32Array; forest: ClusterForest; featureCount: number; timeCount: number },
): number {
  const { points, forest, featureCount, timeCount } = work;
  let pointCount = 0;
  for (let x = 0; x < featureCount; x++) {
    if ((bits[at.bits + (x >> 3)] >> (x & 7)) & 1) points[pointCount++] = x;
  }
  const mass = joinClusters(z, at.z, points, forest, { pointCount, timeCount });
  releaseClusters(points, pointCount, forest);
  return mass;
}
