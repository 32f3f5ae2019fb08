import { groupFeatures } from '../../kernels/group';
import type { GroupSource, NullModel, PermutationRange, RunInput } from './model';

/**
 * A null's f64 sampler as a source of groups: a pair's surrogates are made whole for a range of
 * permutations, then handed out eight features at a time.
 */
export function rowGroups(model: NullModel, run: RunInput): GroupSource {
  const { featureCount } = run;
  return {
    arrays: (rows) => ({
      rowsFirst: ['f32', rows * featureCount],
      rowsSecond: ['f32', model.statistic === 'difference' ? 0 : rows * featureCount],
    }),
    sampler(_, arrays) {
      const sampler = model.sampler(run);
      const whole = [arrays.rowsFirst, arrays.rowsSecond] as Float32Array[];
      let held = -1;
      let pair = { j: 0, k: 0 };

      function make(range: PermutationRange) {
        if (held === range.from) return;
        const values = (range.to - range.from) * featureCount;
        const [first, second] = whole.map((array) => array.subarray(0, values));
        sampler.surrogates(pair.j, pair.k, range, first, second);
        held = range.from;
      }

      return {
        begin(j, k) {
          pair = { j, k };
          held = -1;
        },
        fill(group, range, first, second) {
          make(range);
          const rows = range.to - range.from;
          gather(whole[0], first, rows, group * groupFeatures, featureCount);
          if (model.statistic === 'difference') return;
          gather(whole[1], second, rows, group * groupFeatures, featureCount);
        },
      };
    },
  };
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
