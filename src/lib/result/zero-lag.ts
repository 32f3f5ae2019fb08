import type { ResultEdge } from '$lib/model/result';

/**
 * A preferred lag within 15 degrees of zero or half a turn counts as near zero: what volume
 * conduction and a shared reference give. The limit is ours and is stated wherever it is used.
 */
export const nearZeroRad = Math.PI / 12;

export function isNearZeroLag(lagRad: number): boolean {
  return Math.abs(Math.sin(lagRad)) <= Math.sin(nearZeroRad);
}

/** The lag of the condition that synchronises more: the one the edge's claim is about. */
export function claimedLagRad(edge: ResultEdge): number {
  return edge.difference >= 0 ? edge.lagARad : edge.lagBRad;
}

export function lagMs(lagRad: number, hz: number): number {
  return (lagRad / (2 * Math.PI * hz)) * 1000;
}

/** How many of the claimed edges have a lag near zero. */
export function nearZeroCount(edges: readonly ResultEdge[]): number {
  return edges.filter((edge) => isNearZeroLag(claimedLagRad(edge))).length;
}
