import { labelBlockBits, labelBlockCount } from '../../../workers/kernels/label-sums';

/** All ways to choose `size` of `count` epochs. */
export function choices(count: number, size: number): number[][] {
  if (size === 0) return [[]];
  if (count < size) return [];
  return [
    ...choices(count - 1, size),
    ...choices(count - 1, size - 1).map((chosen) => [...chosen, count - 1]),
  ];
}

/** All orders of 0 .. count - 1. */
export function orders(count: number): number[][] {
  if (count === 0) return [[]];
  return orders(count - 1).flatMap((order) =>
    Array.from({ length: count }, (_, at) => [
      ...order.slice(0, at),
      count - 1,
      ...order.slice(at),
    ]),
  );
}

/** Draws of the label null that hold each relabelling once. */
export function allLabels(epochsA: number, epochsB: number): { draws: ArrayBuffer; count: number } {
  const all = choices(epochsA + epochsB, epochsA);
  const blocks = labelBlockCount(epochsA + epochsB);
  const masks = new Uint8Array(all.length * blocks);
  for (const [p, chosen] of all.entries()) {
    for (const n of chosen) {
      masks[p * blocks + Math.floor(n / labelBlockBits)] |= 1 << (n % labelBlockBits);
    }
  }
  return { draws: masks.buffer, count: all.length };
}

/**
 * Draws of the trial-order null for two sites: site 1 keeps its order, and site 2 takes each order
 * of A once; B stays as it is.
 */
export function allOrders(epochsA: number, epochsB: number): { draws: ArrayBuffer; count: number } {
  const all = orders(epochsA);
  const rest = Array.from({ length: epochsB }, (_, n) => epochsA + n);
  const first = [...Array.from({ length: epochsA }, (_, n) => n), ...rest];
  const draws = Uint16Array.from(all.flatMap((order) => [...first, ...order, ...rest]));
  return { draws: draws.buffer, count: all.length };
}
