import { clusterForest, joinClusters, releaseClusters } from './clusters';
import { groupFeatures } from './group';
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
  maps: Pick<NullMapRows, 'z' | 'positive' | 'negative'>,
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
    for (let x = 0; x < featureCount; x++) {
      z[x] = maps.z[((x >> 3) * rows + row) * groupFeatures + (x & 7)];
    }
    for (const bits of signsOf(maps, shape.tailSign)) {
      const pointCount = marked(bits, row * shape.bitStride, featureCount, points);
      const mass = joinClusters(z, 0, points, forest, { pointCount, timeCount });
      releaseClusters(points, pointCount, forest);
      if (mass > masses[row]) masses[row] = mass;
    }
  }
}

function signsOf(
  { positive, negative }: Pick<NullMapRows, 'positive' | 'negative'>,
  tailSign: -1 | 0 | 1,
): Uint8Array[] {
  if (tailSign > 0) return [positive];
  return tailSign < 0 ? [negative] : [positive, negative];
}

/** Lists the points whose bits are set, and counts them. */
function marked(bits: Uint8Array, start: number, featureCount: number, points: Int32Array): number {
  let count = 0;
  for (let x = 0; x < featureCount; x++) {
    if ((bits[start + (x >> 3)] >> (x & 7)) & 1) points[count++] = x;
  }
  return count;
}
