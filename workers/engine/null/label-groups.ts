import { groupFeatures, groupLanes } from '../../kernels/group';
import type { Arrays, ArrayPlan, Kernels } from '../../kernels/kernels';
import { labelLaneTableLength, labelOffsetCount, labelOffsets } from '../../kernels/label-lanes';
import type { GroupSampler, GroupSource, HeldPair, PermutationRange, RunInput } from './model';

/**
 * Surrogates of relabelled epochs for resultant lengths, by tables of partial sums; B is the total
 * minus A.
 */
export function labelGroups(run: RunInput): GroupSource {
  return {
    arrays: (rows) => labelArrays(run, rows),
    sampler: (kernels, arrays) => new LabelGroups(run, kernels, arrays as LabelArrays),
  };
}

function labelArrays({ layout }: RunInput, rows: number) {
  return {
    terms: ['f32', layout.epochCount * groupLanes],
    offsets: ['u16', labelOffsetCount(layout.epochCount, rows)],
    table: ['f32', labelLaneTableLength],
    labelled: ['f32', rows * groupLanes],
    total: ['f32', groupLanes],
    exact: ['f64', groupLanes],
  } as const satisfies ArrayPlan;
}

type LabelArrays = Arrays<ReturnType<typeof labelArrays>>;

class LabelGroups implements GroupSampler {
  private readonly masks: Uint8Array;
  private arranged: PermutationRange = { from: 0, to: 0 };
  private pair: HeldPair | null = null;

  constructor(
    private readonly run: RunInput,
    private readonly kernels: Kernels,
    private readonly arrays: LabelArrays,
  ) {
    this.masks = new Uint8Array(run.draws);
  }

  begin(pair: HeldPair): void {
    this.pair = pair;
  }

  fill(group: number, range: PermutationRange, values: Float32Array): void {
    const { kernels, arrays, run } = this;
    const { epochCount, samplesPerEpoch } = run.layout;
    const { epochsA, epochsB } = run.shape;
    const { phasorsJ, phasorsK } = this.pair!;
    const { terms, offsets, table, labelled, total, exact } = arrays;
    const rows = range.to - range.from;
    const first = group * groupFeatures;
    const count = Math.min(groupFeatures, run.featureCount - first);
    this.arrange(range);
    kernels.crossLanes(phasorsJ, phasorsK, terms, { epochCount, samplesPerEpoch, first, count });
    kernels.sumLanes(terms, exact, { from: 0, to: epochCount });
    total.set(exact);
    kernels.sumLabelledLanes(terms, offsets, table, labelled, { epochCount, rows });
    kernels.resultantDifferences(labelled, total, values, { rows, epochsA, epochsB });
  }

  /** Masks are rearranged once for a range, whatever the number of pairs. */
  private arrange(range: PermutationRange): void {
    if (this.arranged.from === range.from && this.arranged.to === range.to) return;
    labelOffsets(this.masks, this.arrays.offsets, this.run.layout.epochCount, range);
    this.arranged = range;
  }
}
