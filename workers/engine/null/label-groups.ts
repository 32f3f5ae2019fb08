import { groupFeatures, groupLanes } from '../../kernels/group';
import { labelLaneTableLength, labelOffsetCount, labelOffsets } from '../../kernels/label-lanes';
import type { Arrays } from '../../kernels/kernels';
import type { GroupSource, PermutationRange, RunInput } from './model';
import { siteSlots } from './site-slots';

/**
 * Surrogates of relabelled epochs for resultant lengths, by tables of partial sums; B is the total
 * minus A. Null for other measures.
 */
export function labelGroups(run: RunInput): GroupSource | null {
  if (!run.measure.isResultantLength || run.layout.samplesPerEpoch !== run.featureCount)
    return null;
  const { layout, shape, featureCount } = run;
  const { epochCount, samplesPerEpoch } = layout;
  const { epochsA, epochsB } = shape;
  const slots = siteSlots(run);
  const plan = (rows: number) =>
    ({
      ...slots.arrays,
      terms: ['f32', epochCount * groupLanes],
      offsets: ['u16', labelOffsetCount(epochCount, rows)],
      table: ['f32', labelLaneTableLength],
      labelled: ['f32', rows * groupLanes],
      total: ['f32', groupLanes],
      exact: ['f64', groupLanes],
    }) as const;

  return {
    arrays: plan,
    sampler(kernels, given) {
      const arrays = given as Arrays<ReturnType<typeof plan>>;
      const { terms, offsets, table, labelled, total, exact } = arrays;
      const masks = new Uint8Array(run.draws);
      let rearranged: PermutationRange = { from: 0, to: 0 };
      let pair = slots.none(arrays);

      function arrange(range: PermutationRange) {
        if (rearranged.from === range.from && rearranged.to === range.to) return;
        labelOffsets(masks, offsets, epochCount, range);
        rearranged = range;
      }

      return {
        begin(j, k) {
          pair = slots.hold(arrays, j, k);
        },
        fill(group, range, values) {
          arrange(range);
          const rows = range.to - range.from;
          const first = group * groupFeatures;
          const count = Math.min(groupFeatures, featureCount - first);
          kernels.crossLanes(pair.j, pair.k, terms, { epochCount, samplesPerEpoch, first, count });
          kernels.sumLanes(terms, exact, { from: 0, to: epochCount });
          total.set(exact);
          kernels.sumLabelledLanes(terms, offsets, table, labelled, { epochCount, rows });
          kernels.resultantDifferences(labelled, total, values, { rows, epochsA, epochsB });
        },
      };
    },
  };
}
