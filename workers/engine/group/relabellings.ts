import { permutationGenerator } from '../null/random';
import type { GroupDesign } from './design';

/** The relabellings of a group test beside the identity. */
export interface Relabellings {
  count: number;
  /** All that there are, so that p is exact; otherwise drawn at random. */
  exact: boolean;
  /**
   * `marks[relabelling * participantCount + i]`: 1 where participant i's sign is turned (paired), or
   * where it is put in the first group (between).
   */
  marks: Uint8Array;
}

/**
 * All relabellings but the identity where these are fewer than `permutations`, else `permutations`
 * random ones, number p drawn from its own generator. The identity is counted by the + 1 of p.
 * Allocates one byte a relabelling and participant.
 * Source: Fisher 1935, section 21 (sign flips); Pitman 1937 (group labels).
 */
export function relabellings(
  design: GroupDesign,
  participantCount: number,
  permutations: number,
  seed: string,
): Relabellings {
  const inFirst = design.kind === 'paired' ? null : design.inFirst;
  const firstCount = inFirst?.filter(Boolean).length ?? 0;
  const total = inFirst ? choose(participantCount, firstCount) : 2 ** participantCount;
  const exact = total <= permutations;
  const count = exact ? total - 1 : permutations;
  const marks = new Uint8Array(count * participantCount);
  const rowOf = (p: number) => marks.subarray(p * participantCount, (p + 1) * participantCount);
  if (!exact) {
    for (let p = 0; p < count; p++) {
      const random = permutationGenerator(seed, `group-${design.kind}`, p);
      if (inFirst) deal(rowOf(p), firstCount, random.below);
      else rowOf(p).forEach((_, i, row) => (row[i] = random.below(2)));
    }
  } else if (inFirst) {
    let p = 0;
    for (const chosen of choices(participantCount, firstCount)) {
      if (chosen.every((i) => inFirst[i])) continue;
      const row = rowOf(p++);
      for (const i of chosen) row[i] = 1;
    }
  } else {
    for (let p = 0; p < count; p++) {
      rowOf(p).forEach((_, i, row) => (row[i] = Math.floor((p + 1) / 2 ** i) % 2));
    }
  }
  return { count, exact, marks };
}

/** Marks `count` of a row's places, every choice equally likely. */
function deal(row: Uint8Array, count: number, below: (limit: number) => number): void {
  const order = Array.from(row, (_, i) => i);
  for (let n = 0; n < count; n++) {
    const other = n + below(order.length - n);
    row[order[other]] = 1;
    order[other] = order[n];
  }
}

function choose(n: number, k: number): number {
  let ways = 1;
  for (let i = 1; i <= k; i++) ways = Math.round((ways * (n - k + i)) / i);
  return ways;
}

/** Every choice of k of 0 .. n - 1, each ascending, in lexical order. */
function* choices(n: number, k: number): Generator<number[]> {
  const chosen = Array.from({ length: k }, (_, i) => i);
  for (;;) {
    yield chosen;
    let at = k - 1;
    while (at >= 0 && chosen[at] === n - k + at) at--;
    if (at < 0) return;
    chosen[at]++;
    for (let i = at + 1; i < k; i++) chosen[i] = chosen[i - 1] + 1;
  }
}
