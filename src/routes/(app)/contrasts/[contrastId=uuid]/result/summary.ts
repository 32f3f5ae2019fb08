import { clopperPearson, type Plan } from '$engine';
import { nearZeroCount } from '$lib/result/zero-lag';
import type { PairValues, ResultEdge } from '$lib/model/result';

/** The headline of a result under one correction. */
export interface Summary {
  pairCount: number;
  pairsTested: number;
  edgeCount: number;
  smallestP: number;
  /** Absent where the adjusted p is no single proportion. */
  smallestInterval: [number, number] | null;
  /** Where the smallest p stands. */
  smallest: { pair: number; point: number };
  nearZero: number;
}

export function summarise(
  edges: readonly ResultEdge[],
  peaks: PairValues,
  test: Plan['test'],
  singleProportion: boolean,
): Summary {
  const first = edges[0];
  const smallest = first
    ? { pair: first.pair, point: first.peakPoint, p: first.adjustedP }
    : smallestOf(peaks);
  return {
    pairCount: new Set(edges.map((edge) => edge.pair)).size,
    pairsTested: peaks.z.length,
    edgeCount: edges.length,
    smallestP: smallest.p,
    smallestInterval: singleProportion
      ? clopperPearson(exceedancesOf(smallest.p, test.permutations), test.permutations)
      : null,
    smallest,
    nearZero: nearZeroCount(edges),
  };
}

/** The count behind p = (1 + b) / (1 + m); p may have been rounded to single precision. */
function exceedancesOf(p: number, permutations: number): number {
  const count = Math.round(p * (permutations + 1)) - 1;
  return Math.max(0, Math.min(permutations, count));
}

function smallestOf(peaks: PairValues) {
  let best = 0;
  peaks.adjustedP.forEach((p, pair) => {
    const known = peaks.adjustedP[best]!;
    const stronger = Math.abs(peaks.z[pair]!) > Math.abs(peaks.z[best]!);
    if (p < known || (p === known && stronger)) best = pair;
  });
  return { pair: best, point: peaks.point[best]!, p: peaks.adjustedP[best]! };
}
