import { tailStatistic, type Plan } from '$engine';
import type { PairValues } from '$lib/model/result';

type Tail = Plan['test']['tail'];

/**
 * The strongest point of each pair and its smallest adjusted p, from the run's maps
 * `[pair][point]`. "Strongest" is what the test's tail looks for: the largest |z|, z or −z.
 */
export function pairPeaks(
  z: Float32Array,
  adjustedP: Float32Array,
  pairCount: number,
  tail: Tail,
): PairValues {
  const points = z.length / pairCount;
  const values = emptyValues(pairCount);
  const strength = (at: number) => tailStatistic(z[at]!, tail);
  for (let pair = 0; pair < pairCount; pair++) {
    const start = pair * points;
    let best = 0;
    let smallest = 1;
    for (let x = 0; x < points; x++) {
      if (strength(start + x) > strength(start + best)) best = x;
      if (adjustedP[start + x]! < smallest) smallest = adjustedP[start + x]!;
    }
    values.z[pair] = z[start + best]!;
    values.adjustedP[pair] = smallest;
    values.point[pair] = best;
  }
  return values;
}

/** The values of every pair at one point. */
export function pairsAtPoint(
  z: Float32Array,
  adjustedP: Float32Array,
  pairCount: number,
  point: number,
): PairValues {
  const points = z.length / pairCount;
  const values = emptyValues(pairCount);
  for (let pair = 0; pair < pairCount; pair++) {
    values.z[pair] = z[pair * points + point]!;
    values.adjustedP[pair] = adjustedP[pair * points + point]!;
    values.point[pair] = point;
  }
  return values;
}

function emptyValues(pairCount: number): PairValues {
  return {
    z: new Float32Array(pairCount),
    adjustedP: new Float32Array(pairCount),
    point: new Int32Array(pairCount),
  };
}
