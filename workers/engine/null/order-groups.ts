import { groupFeatures, groupLanes } from '../../kernels/group';
import type { Arrays, ArrayPlan, Kernels } from '../../kernels/kernels';
import type { GroupSampler, GroupSource, HeldPair, PermutationRange, RunInput } from './model';

/**
 * Surrogates of shuffled epochs for resultant lengths: the phasors of eight features of all epochs
 * stay in a core's first cache while every permutation sums its products.
 */
export function orderGroups(run: RunInput): GroupSource {
  return {
    arrays: (rows) => orderArrays(run, rows),
    sampler: (kernels, arrays) => new OrderGroups(run, kernels, arrays as OrderArrays),
  };
}

function orderArrays({ layout, shape }: RunInput, rows: number) {
  return {
    lanesJ: ['f32', layout.epochCount * groupLanes],
    lanesK: ['f32', layout.epochCount * groupLanes],
    partnersA: ['u16', rows * shape.epochsA],
    partnersB: ['u16', rows * shape.epochsB],
    sums: ['f32', rows * groupLanes],
  } as const satisfies ArrayPlan;
}

type OrderArrays = Arrays<ReturnType<typeof orderArrays>>;

class OrderGroups implements GroupSampler {
  private readonly orders: Uint16Array;
  private pair: HeldPair | null = null;
  /** First permutation of the range whose partners stand in the arrays. */
  private arranged = -1;

  constructor(
    private readonly run: RunInput,
    private readonly kernels: Kernels,
    private readonly arrays: OrderArrays,
  ) {
    this.orders = new Uint16Array(run.draws);
  }

  begin(pair: HeldPair): void {
    this.pair = pair;
    this.arranged = -1;
  }

  fill(group: number, range: PermutationRange, first: Float32Array, second: Float32Array): void {
    const { kernels, arrays, run } = this;
    const { epochsA, epochsB } = run.shape;
    const { lanesJ, lanesK, partnersA, partnersB, sums } = arrays;
    const rows = range.to - range.from;
    if (this.arranged !== range.from) this.arrange(range);
    this.takeLanes(group);
    kernels.sumShuffledLanes(lanesJ, lanesK, partnersA, sums, { rows, epochCount: epochsA });
    kernels.resultantsOfLanes(sums, first, { rows, epochs: epochsA });
    const ofB = epochsA * groupLanes;
    const shape = { rows, epochCount: epochsB };
    kernels.sumShuffledLanes(lanesJ.subarray(ofB), lanesK.subarray(ofB), partnersB, sums, shape);
    kernels.resultantsOfLanes(sums, second, { rows, epochs: epochsB });
  }

  private takeLanes(group: number): void {
    const { run, arrays, kernels } = this;
    const { phasorsJ, phasorsK } = this.pair!;
    const { epochCount, samplesPerEpoch } = run.layout;
    const first = group * groupFeatures;
    const count = Math.min(groupFeatures, run.featureCount - first);
    const shape = { epochCount, samplesPerEpoch, first, count };
    kernels.siteLanes(phasorsJ, arrays.lanesJ, shape);
    kernels.siteLanes(phasorsK, arrays.lanesK, shape);
  }

  /** From both sites' orders to the epoch of k that stands beside each epoch of j. */
  private arrange(range: PermutationRange): void {
    const { epochsA, epochsB, siteCount } = this.run.shape;
    const { partnersA, partnersB } = this.arrays;
    const { orders } = this;
    const epochCount = epochsA + epochsB;
    for (let p = range.from; p < range.to; p++) {
      const ofJ = (p * siteCount + this.pair!.j) * epochCount;
      const ofK = (p * siteCount + this.pair!.k) * epochCount;
      const rowA = (p - range.from) * epochsA;
      const rowB = (p - range.from) * epochsB - epochsA;
      for (let n = 0; n < epochsA; n++) partnersA[rowA + orders[ofJ + n]] = orders[ofK + n];
      for (let n = epochsA; n < epochCount; n++) {
        partnersB[rowB + orders[ofJ + n]] = orders[ofK + n] - epochsA;
      }
    }
    this.arranged = range.from;
  }
}
