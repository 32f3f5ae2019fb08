import type { CorrectionOutcome } from '../types';
import { ties } from '../ties';
import { clopperPearson } from './clopper-pearson';
import type { Correction, Evidence } from './correction';
import { ascending, countAtLeast, criticalOf, median } from './distribution';
import { regionEdges } from './edges';
import { append, joinIntervals } from './intervals';
import { mostExceedances, permutationP } from './p-value';
import { featuresOf, type NullPart } from './part';
import { tailStatistic } from './tail';

/**
 * The step-down p of a feature with statistic t asks in how many permutations some feature that is
 * observed at most as large as t reaches t: s(x) <= t <= s_p(x) for some x. So permutation p
 * exceeds t exactly where t lies in the union of the intervals [s(x), s_p(x)] over all features.
 * Unions of blocks join into the union of all, and stay short: most features share one interval.
 * Merged values: for each permutation in turn the count of its intervals, then their ends.
 */
export const stepDownIntervals: NullPart = {
  isMaxima: false,
  gatherer(context) {
    const { tail, permutations } = context.test;
    const size = featuresOf(context);
    const unions = Array.from({ length: permutations }, (): number[] => []);
    const observed = new Float64Array(size);
    const order = new Uint32Array(size);
    return {
      begin(_pair, z) {
        for (let x = 0; x < size; x++) {
          observed[x] = tailStatistic(z[x], tail);
          order[x] = x;
        }
        order.sort((a, b) => observed[a] - observed[b]);
      },
      add(permutation, z) {
        const own: number[] = [];
        for (const x of order) {
          const reach = Math.fround(tailStatistic(z[x], tail) + ties.z);
          if (reach >= observed[x]) append(own, observed[x], reach);
        }
        unions[permutation] = joinIntervals(unions[permutation], own);
      },
      finish: () => flat(unions),
    };
  },
  merge(shares, { test }) {
    const blocks = shares.map((share) => [...unionsOf(share)]);
    const unions = Array.from({ length: test.permutations }, (_, p) =>
      blocks.reduce((union, block) => joinIntervals(union, block[p]), [] as number[]),
    );
    return flat(unions);
  },
  fault(values, { test }) {
    let at = 0;
    for (let p = 0; p < test.permutations; p++) {
      const count = values[at];
      if (!(Number.isInteger(count) && count >= 0 && at + 2 * count < values.length)) {
        return `the intervals of permutation ${p} do not fit into ${values.length} values`;
      }
      for (let i = at + 1; i <= at + 2 * count; i++) {
        if (!Number.isFinite(values[i]) || (i > at + 1 && values[i] < values[i - 1])) {
          return `the intervals of permutation ${p} do not ascend at ${i}`;
        }
      }
      at += 1 + 2 * count;
    }
    return at === values.length ? null : `${values.length - at} values too many`;
  },
};

function flat(unions: number[][]): Float32Array {
  const out = new Float32Array(unions.reduce((sum, union) => sum + 1 + union.length, 0));
  let at = 0;
  for (const union of unions) {
    out[at] = union.length / 2;
    out.set(union, at + 1);
    at += 1 + union.length;
  }
  return out;
}

function* unionsOf(values: Float32Array): Generator<number[]> {
  for (let at = 0; at < values.length;) {
    const end = at + 1 + 2 * values[at];
    yield Array.from(values.subarray(at + 1, end));
    at = end;
  }
}

/** Exceedances of each feature, with the monotony of the step-down: never fewer than a larger one's. */
function exceedancesOf(evidence: Evidence): (feature: number) => number {
  const { maps, tail } = evidence;
  const from: number[] = [];
  const to: number[] = [];
  for (const union of unionsOf(maps.parts[stepDownMaximum.id])) {
    for (let i = 0; i < union.length; i += 2) {
      from.push(union[i]);
      to.push(union[i + 1]);
    }
  }
  const starts = Float64Array.from(from).sort();
  const ends = Float64Array.from(to).sort();
  const values = Float64Array.from(maps.z, (z) => tailStatistic(z, tail)).sort();
  const counts = new Uint32Array(values.length);
  let most = 0;
  for (let i = values.length - 1; i >= 0; i--) {
    // Begun at or before the value, and not ended before it.
    const begun = starts.length - countAbove(starts, values[i]);
    const ended = ends.length - countAtLeast(ends, values[i]);
    most = Math.max(most, begun - ended);
    counts[i] = most;
  }
  // Equal values stand together, and the first of them has the largest count.
  return (feature) =>
    counts[values.length - countAtLeast(values, tailStatistic(maps.z[feature], tail))];
}

function countAbove(sorted: Float64Array, bound: number): number {
  let low = 0;
  let high = sorted.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (sorted[middle] > bound) high = middle;
    else low = middle + 1;
  }
  return sorted.length - low;
}

function judge(evidence: Evidence): CorrectionOutcome {
  const { maps, tail, alpha, permutations } = evidence;
  const exceedances = exceedancesOf(evidence);
  const most = mostExceedances(alpha, permutations);
  const adjustedP = new Float32Array(maps.z.length);
  const claimed = new Uint8Array(maps.z.length);
  let least = Infinity;
  for (let x = 0; x < adjustedP.length; x++) {
    const count = exceedances(x);
    adjustedP[x] = permutationP(count, permutations);
    if (count > most) continue;
    claimed[x] = 1;
    least = Math.min(least, tailStatistic(maps.z[x], tail));
  }
  const single = criticalOf(ascending(maps.maxStatistic), most);
  const critical = single === null ? null : Math.min(least, single);
  return {
    id: stepDownMaximum.id,
    adjustedP,
    edges: regionEdges(evidence, stepDownMaximum.id, claimed, (peak) => {
      const count = exceedances(peak);
      return {
        adjustedP: permutationP(count, permutations),
        adjustedPInterval: clopperPearson(count, permutations),
      };
    }),
    criticalValue: critical,
    smallestDifference: critical === null ? null : critical * median(maps.nullSd),
  };
}

export const stepDownMaximum: Correction<'step-down-maximum'> = {
  id: 'step-down-maximum',
  name: 'Maximum statistic, step-down',
  family: 'family-wise',
  statistic: null,
  sentence:
    'As the maximum statistic, but each point is held against the largest value among the points that are not stronger than itself: never weaker, at the same chance of a false claim.',
  caution: null,
  source: 'Westfall and Young 1993 (step-down); p with + 1, Phipson and Smyth 2010',
  part: stepDownIntervals,
  judge,
};
