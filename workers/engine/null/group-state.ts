import { groupFeatures } from '../../kernels/group';
import type { MapScale } from '../../kernels/group-maps';
import type { GroupSums } from '../../kernels/group-moments';
import type { ArrayPlan, Arrays } from '../../kernels/kernels';
import { finishMoments } from '../../kernels/null-moments';
import type { GroupScale } from '../../kernels/standardised-differences';
import { ties } from '../ties';

/** Sums, counts and moments of eight features' surrogates; `inverse` is 1 / sd, or 0 for none. */
export interface GroupState extends GroupSums, GroupScale {
  sd: Float64Array;
  /** The same for z maps, in f32. */
  map: MapScale;
}

const doublesEach = 6 * groupFeatures;
const floatsEach = 5 * groupFeatures;
const countsEach = 2 * groupFeatures;

/** Arrays that `count` states are views of. */
export function statePlan(count: number) {
  return {
    doubles: ['f64', count * doublesEach],
    floats: ['f32', count * floatsEach],
    counts: ['u32', count * countsEach],
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
    const floats = (field: number) => eight(arrays.floats, (from + i) * floatsEach, field);
    const counts = (field: number) => eight(arrays.counts, (from + i) * countsEach, field);
    return {
      origin: doubles(0),
      sum: doubles(1),
      squares: doubles(2),
      mean: doubles(3),
      sd: doubles(4),
      inverse: doubles(5),
      map: { center: floats(0), inverse: floats(1), rest: floats(2) },
      upperFrom: floats(3),
      lowerTo: floats(4),
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
    const { map, mean, sd, inverse } = state;
    inverse[x] = sd[x] === 0 ? 0 : 1 / sd[x];
    map.center[x] = mean[x];
    map.inverse[x] = inverse[x];
    map.rest[x] = (mean[x] - map.center[x]) * inverse[x];
  }
}

/** z_A - z_B stands only where both conditions' nulls have a spread. */
export function sharedScale(a: GroupState, b: GroupState): void {
  for (let x = 0; x < groupFeatures; x++) {
    if (a.inverse[x] === 0 || b.inverse[x] === 0) a.inverse[x] = b.inverse[x] = 0;
  }
}
