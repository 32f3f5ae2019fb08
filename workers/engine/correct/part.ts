import type { Plan } from '../plan';
import type { Axes } from '../types';

/** What a part is gathered and merged with: all of it is in the plan. */
export interface PartContext {
  axes: Axes;
  test: Plan['test'];
}

/** Gathers a part over one block of pairs. It owns its scratch: not re-entrant. */
export interface PartGatherer {
  /** Takes up a pair, by its index among all of the plan, with its observed z map. */
  begin(pair: number, observedZ: Float32Array): void;
  /** One permutation's z map of that pair, read only; each permutation once a pair. */
  add(permutation: number, z: Float32Array): void;
  /** The block's share. */
  finish(): Float32Array;
}

/**
 * What a correction needs of every permutation beyond the maxima that every run keeps. It is
 * gathered block by block, and merged into the same values whatever the blocks were.
 */
export interface NullPart {
  gatherer(context: PartContext): PartGatherer;
  /** From the shares of all blocks, in any order, to what `judge` finds under the correction's id. */
  merge(shares: Float32Array[], context: PartContext): Float32Array;
  /** What is wrong with merged values that somebody sent; null where nothing is. */
  fault(values: Float32Array, context: PartContext): string | null;
  /** Whether the merged values are one maximum a permutation, which can be shown as a histogram. */
  isMaxima: boolean;
}

/** A part that is one maximum a permutation, over all pairs. `of` makes a z map's own maximum. */
export function maximaPart(of: (context: PartContext) => (z: Float32Array) => number): NullPart {
  return {
    isMaxima: true,
    gatherer(context) {
      const largest = of(context);
      const maxima = new Float32Array(context.test.permutations);
      return {
        begin: () => undefined,
        add(permutation, z) {
          const value = largest(z);
          if (value > maxima[permutation]) maxima[permutation] = value;
        },
        finish: () => maxima,
      };
    },
    merge(shares, { test }) {
      const maxima = new Float32Array(test.permutations);
      for (const share of shares) {
        share.forEach((value, p) => (maxima[p] = Math.max(maxima[p], value)));
      }
      return maxima;
    },
    fault: faultOfMaxima,
  };
}

/** Maxima that are none: another count than the permutations, not finite, or below zero. */
export function faultOfMaxima(values: Float32Array, { test }: PartContext): string | null {
  if (values.length !== test.permutations) {
    return `${values.length} values where the plan makes ${test.permutations}`;
  }
  const bad = values.findIndex((value) => !(Number.isFinite(value) && value >= 0));
  return bad < 0 ? null : `${values[bad]} at ${bad} is out of range`;
}

/** Frequency-by-time points of a pair's map. */
export function featuresOf({ axes }: PartContext): number {
  return axes.frequenciesHz.length * axes.timesS.length;
}
