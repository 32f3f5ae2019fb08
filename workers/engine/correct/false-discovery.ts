import type { CorrectionOutcome } from '../types';
import { ties } from '../ties';
import type { Evidence } from './correction';
import { median } from './distribution';
import { regionEdges } from './edges';
import { passes, tailP } from './p-value';
import { tailStatistic } from './tail';

/**
 * Step-up adjusted p: the smallest false discovery rate at which each p is still rejected.
 * @param inflation what p is multiplied by for tests that depend on each other; 1 for none
 * @returns adjusted p in the order given, at most 1; does not change `p`
 * Source: Benjamini and Hochberg 1995; with an inflation, Benjamini and Yekutieli 2001.
 * @example adjustFalseDiscovery(Float64Array.of(0.01, 0.04)) // [0.02, 0.04]
 */
export function adjustFalseDiscovery(p: Float64Array, inflation = 1): Float64Array {
  const sorted = Float64Array.from(p).sort();
  const adjusted = new Float64Array(sorted.length);
  let least = 1;
  for (let rank = sorted.length; rank >= 1; rank--) {
    least = Math.min(least, (inflation * sorted[rank - 1] * sorted.length) / rank);
    adjusted[rank - 1] = least;
  }
  // Equal p have one adjusted value, that of the highest rank among them.
  return p.map((value) => adjusted[firstAtLeast(sorted, value)]);
}

function firstAtLeast(sorted: Float64Array, value: number): number {
  let low = 0;
  let high = sorted.length - 1;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (sorted[middle] >= value) high = middle;
    else low = middle + 1;
  }
  return low;
}

/**
 * Smallest statistic among the claimed points. Without any: a value above every surrogate of every
 * feature, which gives a lone point the smallest p there is; null where even that is not enough.
 */
function criticalValue(evidence: Evidence, claimed: Uint8Array, inflation: number): number | null {
  const { maps, tail, alpha, permutations } = evidence;
  let least = Infinity;
  for (let x = 0; x < claimed.length; x++) {
    if (claimed[x] === 1) least = Math.min(least, tailStatistic(maps.z[x], tail));
  }
  if (least !== Infinity) return least;
  if (!passes(inflation * tailP(0, permutations, tail) * claimed.length, alpha)) return null;
  return maps.maxStatistic.reduce((most, value) => Math.max(most, value), 0) + ties.z;
}

/** The outcome of a step-up false discovery rate, under the correction's id. */
export function judgeFalseDiscovery(
  evidence: Evidence,
  id: string,
  inflation: number,
): CorrectionOutcome {
  const { maps, alpha } = evidence;
  const adjusted = adjustFalseDiscovery(evidence.p, inflation);
  const claimed = Uint8Array.from(adjusted, (p) => (passes(p, alpha) ? 1 : 0));
  const critical = criticalValue(evidence, claimed, inflation);
  return {
    id,
    adjustedP: Float32Array.from(adjusted),
    edges: regionEdges(evidence, id, claimed, (peak) => ({
      adjustedP: adjusted[peak],
      adjustedPInterval: null,
    })),
    criticalValue: critical,
    smallestDifference: critical === null ? null : critical * median(maps.nullSd),
  };
}
