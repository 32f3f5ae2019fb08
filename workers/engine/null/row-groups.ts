import { groupFeatures } from '../../kernels/group';
import type { Arrays, ArrayPlan } from '../../kernels/kernels';
import type {
  GroupSampler,
  GroupSource,
  HeldPair,
  NullModel,
  PairSampler,
  PermutationRange,
  RunInput,
} from './model';

/**
 * A null's f64 sampler as a source of groups: a pair's surrogates are made whole for a range of
 * permutations, then handed out eight features at a time.
 */
export function rowGroups(model: NullModel, run: RunInput): GroupSource {
  const isDifference = model.statistic === 'difference';
  const plan = (rows: number) =>
    ({
      rowsFirst: ['f32', rows * run.featureCount],
      rowsSecond: ['f32', isDifference ? 0 : rows * run.featureCount],
    }) as const satisfies ArrayPlan;
  return {
    arrays: plan,
    sampler(_, arrays) {
      const { rowsFirst, rowsSecond } = arrays as Arrays<ReturnType<typeof plan>>;
      return new RowGroups(model.sampler(run), run.featureCount, rowsFirst, rowsSecond);
    },
  };
}

class RowGroups implements GroupSampler {
  private pair = { j: 0, k: 0 };
  /** First permutation of the range that is held. */
  private held = -1;

  constructor(
    private readonly sampler: PairSampler,
    private readonly featureCount: number,
    private readonly first: Float32Array,
    private readonly second: Float32Array,
  ) {}

  begin({ j, k }: HeldPair): void {
    this.pair = { j, k };
    this.held = -1;
  }

  fill(group: number, range: PermutationRange, first: Float32Array, second: Float32Array): void {
    if (this.held !== range.from) this.make(range);
    const rows = range.to - range.from;
    gather(this.first, first, rows, group * groupFeatures, this.featureCount);
    if (this.second.length === 0) return;
    gather(this.second, second, rows, group * groupFeatures, this.featureCount);
  }

  private make(range: PermutationRange): void {
    const values = (range.to - range.from) * this.featureCount;
    const first = this.first.subarray(0, values);
    const second = this.second.subarray(0, values);
    this.sampler.surrogates(this.pair.j, this.pair.k, range, first, second);
    this.held = range.from;
  }
}

function gather(
  from: Float32Array,
  to: Float32Array,
  rows: number,
  feature: number,
  featureCount: number,
): void {
  const last = featureCount - 1 - feature;
  let at = 0;
  for (let row = 0; row < rows; row++) {
    const start = row * featureCount + feature;
    for (let x = 0; x < groupFeatures; x++) to[at++] = from[start + (x < last ? x : last)];
  }
}
