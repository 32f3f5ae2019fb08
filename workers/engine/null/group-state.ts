import { groupFeatures } from '../../kernels/group';
import type { GroupSums } from '../../kernels/group-moments';
import type { ArrayPlan, Arrays } from '../../kernels/kernels';
import { finishMoments } from '../../kernels/null-moments';
import type { GroupScale } from '../../kernels/standardised-differences';
import { ties } from '../ties';

/** Sums, counts and moments of eight features' surrogates; `inverse` is 1 / sd, or 0 for none. */
export interface GroupState extends GroupSums, GroupScale {
  sd: Float64Array;
}

const doublesEach = 6 * groupFeatures;
const pairsEach = 2 * groupFeatures;

/** Arrays that `count` states are views of. */
export function statePlan(count: number) {
  return {
    doubles: ['f64', count * doublesEach],
    limits: ['f32', count * pairsEach],
    counts: ['u32', count * pairsEach],
  } as const satisfies ArrayPlan;
}

/** The states number `from .. from + count - 1` of those arrays. */
export function groupStates(
  arrays: Arrays<ReturnType<typeof statePlan>>,
  from: number,
  count: number,
): GroupState[] {
  return Array.from({ length: count }, (_, i) => {
    const doubles = (field: number) => eight(arrays.doubles, (from + i) * doublesEach, field);
    const limits = (field: number) => eight(arrays.limits, (from + i) * pairsEach, field);
    const counts = (field: number) => eight(arrays.counts, (from + i) * pairsEach, field);
    return {
      origin: doubles(0),
      sum: doubles(1),
      squares: doubles(2),
      mean: doubles(3),
      sd: doubles(4),
      inverse: doubles(5),
      upperFrom: limits(0),
      lowerTo: limits(1),
      upper: counts(0),
      lower: counts(1),
    };
  });
}

function eight<T extends Float64Array | Float32Array | Uint32Array>(
  array: T,
  base: number,
  field: number,
): T {
  const from = base + field * groupFeatures;
  return array.subarray(from, from + groupFeatures) as T;
}

/** Mean, sd and 1 / sd from the sums; no spread gives an inverse of 0, so that z is 0. */
export function finishState(state: GroupState, permutations: number): void {
  finishMoments(state, permutations, ties.zeroSd, state.mean, state.sd);
  for (let x = 0; x < groupFeatures; x++) {
    state.inverse[x] = state.sd[x] === 0 ? 0 : 1 / state.sd[x];
  }
}

/** z_A - z_B stands only where both conditions' nulls have a spread. */
export function sharedScale(a: GroupState, b: GroupState): void {
  for (let x = 0; x < groupFeatures; x++) {
    if (a.inverse[x] === 0 || b.inverse[x] === 0) a.inverse[x] = b.inverse[x] = 0;
  }
}

/** A value in units of a null, rounded to f32: what z means everywhere. */
export function standardised(value: number, scale: GroupScale, x: number): number {
  return Math.fround((value - scale.mean[x]) * scale.inverse[x]);
}
