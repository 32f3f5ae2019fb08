import { clusterForest, joinClusters, releaseClusters } from './clusters';
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
  maps: Pick<NullMapRows, 'beyond' | 'positive' | 'negative'>,
  masses: Float32Array,
  _scratch: Float64Array,
  map: { rows: number; frequencyCount: number; timeCount: number; shape: NullMapShape },
): void {
  const { rows, timeCount, shape } = map;
  const featureCount = map.frequencyCount * timeCount;
  const z = new Float32Array(featureCount);
  const points = new Int32Array(featureCount);
  const forest = clusterForest(featureCount);
  for (let row = 0; row < rows; row++) {
    for (const sign of [1, -1]) {
      if (sign * shape.tailSign < 0) continue;
      const bits = sign > 0 ? maps.positive : maps.negative;
      const pointCount = marked(bits, row * shape.bitStride, featureCount, points);
      const first = sign > 0 ? row * shape.stride : (row + 1) * shape.stride - 1;
      for (let i = 0; i < pointCount; i++) z[points[i]] = maps.beyond[first + sign * i];
      const mass = joinClusters(z, 0, points, forest, { pointCount, timeCount });
      releaseClusters(points, pointCount, forest);
      if (mass > masses[row]) masses[row] = mass;
    }
  }
}

/** Lists the points whose bits are set, and counts them. */
function marked(bits: Uint8Array, start: number, featureCount: number, points: Int32Array): number {
  let count = 0;
  for (let x = 0; x < featureCount; x++) {
    if ((bits[start + (x >> 3)] >> (x & 7)) & 1) points[count++] = x;
  }
  return count;
}
