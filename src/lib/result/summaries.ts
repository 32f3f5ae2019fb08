import type { HeadEdge } from '$lib/figures/HeadMap.svelte';
import type { PairValues, ResultEdge } from '$lib/model/result';

/** The strongest edge of each pair that has any, strongest first. */
export function strongestByPair(edges: readonly ResultEdge[]): ResultEdge[] {
  const best = new Map<number, ResultEdge>();
  for (const edge of edges) {
    const known = best.get(edge.pair);
    if (!known || Math.abs(edge.z) > Math.abs(known.z)) best.set(edge.pair, edge);
  }
  return [...best.values()].sort((one, other) => Math.abs(other.z) - Math.abs(one.z));
}

/** More curves than this are a tangle that shows nothing. */
export const mostCurves = 120;
const mistCurves = 8;

/** What the head shows: the claimed edges, and the strongest of those that did not survive. */
export function headEdges(strongest: readonly ResultEdge[], values: PairValues): HeadEdge[] {
  const claimed = new Set(strongest.map((edge) => edge.pair));
  const others = Array.from(values.z.keys())
    .filter((pair) => !claimed.has(pair))
    .sort((one, other) => Math.abs(values.z[other]!) - Math.abs(values.z[one]!))
    .slice(0, strongest.length > mostCurves / 2 ? 0 : mistCurves);
  return [
    ...strongest
      .slice(0, mostCurves)
      .map((edge) => ({ pair: edge.pair, z: edge.z, survives: true })),
    ...others.map((pair) => ({ pair, z: values.z[pair]!, survives: false })),
  ];
}

/** A round limit for a symmetric colour scale: the largest |z|, at least 3. */
export function colourLimit(values: ArrayLike<number>): number {
  let largest = 3;
  for (let i = 0; i < values.length; i++) largest = Math.max(largest, Math.abs(values[i]!) || 0);
  return Math.ceil(largest * 2) / 2;
}
