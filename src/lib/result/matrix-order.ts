import type { SpherePosition } from '$lib/figures/head-geometry';

export type MatrixOrder = 'plan' | 'front-to-back' | 'left-to-right';

export const matrixOrders: { value: MatrixOrder; label: string }[] = [
  { value: 'plan', label: 'as in the plan' },
  { value: 'front-to-back', label: 'front to back' },
  { value: 'left-to-right', label: 'left to right' },
];

/** Below this distance from the midline, on the unit sphere, a site counts as on it. */
const midline = 0.05;

/**
 * Site indices in the order of display. Ordered by place, neighbours on the head are neighbours
 * in the matrix; sites without a position follow in the plan's order.
 */
export function matrixOrder(
  positions: readonly (SpherePosition | null)[],
  order: MatrixOrder,
): number[] {
  const all = positions.map((_, i) => i);
  if (order === 'plan') return all;
  const placed = all.filter((i) => positions[i]);
  const rest = all.filter((i) => !positions[i]);
  const key = order === 'front-to-back' ? frontToBack : leftToRight;
  placed.sort((one, other) => {
    const a = key(positions[one]!);
    const b = key(positions[other]!);
    return a[0] - b[0] || a[1] - b[1] || one - other;
  });
  return [...placed, ...rest];
}

/** Rows of sites from the nose on, each from left to right. */
function frontToBack(position: SpherePosition): [number, number] {
  return [-Math.round(elevationTowardsNose(position) * 8), position.x];
}

/** Left half, midline, right half; each from the nose on. */
function leftToRight(position: SpherePosition): [number, number] {
  const side = Math.abs(position.x) < midline ? 0 : Math.sign(position.x);
  return [side, -elevationTowardsNose(position)];
}

/** −1 at the back of the head to 1 at the nose. */
function elevationTowardsNose(position: SpherePosition): number {
  return Math.asin(Math.max(-1, Math.min(1, position.y))) / (Math.PI / 2);
}

/** `pairAt(row, column)` for sites in display order; −1 where the plan has no such pair. */
export function pairLookup(
  pairs: readonly (readonly [number, number])[],
  siteCount: number,
  order: readonly number[],
): (row: number, column: number) => number {
  const table = new Int32Array(siteCount * siteCount).fill(-1);
  pairs.forEach(([j, k], pair) => {
    table[j * siteCount + k] = pair;
    table[k * siteCount + j] = pair;
  });
  return (row, column) => table[order[row]! * siteCount + order[column]!]!;
}
