import { labelBlockBits, labelBlockCount } from '../../kernels/label-sums';
import { logChoose } from '../numbers/counting';
import { labelGroups } from './label-groups';
import { LabelSampler } from './label-sampler';
import type { DrawShape, NullModel, PermutationRange } from './model';
import { permutationGenerator } from './random';

/**
 * Draws: Uint8, `draws[permutation * blocks + block]`, bit i set when epoch 7 * block + i is
 * labelled A (epochs of A come first in the phases). Exactly epochsA bits are set.
 */
function draw(
  seed: string,
  range: PermutationRange,
  draws: ArrayBufferLike,
  shape: DrawShape,
): void {
  const { epochsA } = shape;
  const epochCount = epochsA + shape.epochsB;
  const blocks = labelBlockCount(epochCount);
  const masks = new Uint8Array(draws);
  const order = new Uint32Array(epochCount);
  for (let p = range.from; p < range.to; p++) {
    const random = permutationGenerator(seed, labels.id, p);
    const row = p * blocks;
    masks.fill(0, row, row + blocks);
    for (let n = 0; n < epochCount; n++) order[n] = n;
    // The first epochsA steps of a Fisher-Yates shuffle: every choice of epochsA is equally likely.
    for (let n = 0; n < epochsA; n++) {
      const other = n + random.below(epochCount - n);
      const chosen = order[other];
      order[other] = order[n];
      masks[row + Math.floor(chosen / labelBlockBits)] |= 1 << (chosen % labelBlockBits);
    }
  }
}

export const labels: NullModel<'labels'> = {
  id: 'labels',
  name: 'Condition labels',
  shuffles: 'The labels A and B are dealt anew over all epochs, keeping both counts.',
  underNull:
    'If A and B do not differ, an epoch might as well have carried the other label: the labels are exchangeable.',
  source:
    'Fisher 1935 (randomisation test); Maris and Oostenveld 2007 (contrasts over time and frequency)',
  needsWholeWindow: false,
  statistic: 'difference',
  statisticName: 'difference A − B',
  exchangesLabels: true,
  mostWindowSamples: Infinity,
  logArrangements: (shape) => logChoose(shape.epochsA + shape.epochsB, shape.epochsA),
  hasTwins: (shape) => shape.epochsA === shape.epochsB,
  drawsByteLength: (shape) => shape.permutations * labelBlockCount(shape.epochsA + shape.epochsB),
  draw,
  sampler: (run) => new LabelSampler(run),
  groups: labelGroups,
};
