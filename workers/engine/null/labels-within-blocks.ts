import { labelBlockBits, labelBlockCount } from '../../kernels/label-sums';
import { logChoose } from '../numbers/counting';
import type { SettingField, Settings } from '../settings';
import type { Epoch } from '../types';
import { labelGroups } from './label-groups';
import { LabelSampler } from './label-sampler';
import type { DrawShape, NullModel, PermutationRange } from './model';
import { permutationGenerator } from './random';

const settings: SettingField[] = [
  {
    kind: 'choice',
    key: 'by',
    name: 'a block is',
    options: [
      { value: 'recording', name: 'a recording' },
      { value: 'epochs', name: 'a run of epochs' },
      { value: 'minutes', name: 'a stretch of minutes' },
    ],
    initial: 'recording',
    sentence:
      'Labels change places inside a block only, so whatever differs from block to block cannot make a claim.',
  },
  {
    kind: 'number',
    key: 'size',
    name: 'epochs or minutes in a block',
    unit: null,
    least: 2,
    most: 10_000,
    whole: true,
    initial: 20,
    sentence: 'Epochs of A and B together in their order of time, or minutes; unused by recording.',
  },
];

/** Blocks by recording, by runs of epochs in time within a recording, or by minutes of its clock. */
function blocksOf(epochs: Pick<Epoch, 'recording' | 'onsetS'>[], { by, size }: Settings): number[] {
  const length = Number(size);
  const order = epochs
    .map((_, n) => n)
    .sort(
      (x, y) =>
        compare(epochs[x].recording, epochs[y].recording) || epochs[x].onsetS - epochs[y].onsetS,
    );
  const names = new Map<string, number>();
  const seen = new Map<string, number>();
  const blocks = new Array<number>(epochs.length);
  for (const n of order) {
    const { recording, onsetS } = epochs[n];
    const place = seen.get(recording) ?? 0;
    seen.set(recording, place + 1);
    const part = by === 'epochs' ? place / length : by === 'minutes' ? onsetS / 60 / length : 0;
    const name = `${recording}/${Math.floor(part)}`;
    if (!names.has(name)) names.set(name, names.size);
    blocks[n] = names.get(name)!;
  }
  return blocks;
}

const compare = (a: string, b: string) => (a < b ? -1 : a > b ? 1 : 0);

/** Epochs of each block, and how many of them are of A. */
function members({ blocks, epochsA, epochsB }: DrawShape): { epochs: number[]; a: number }[] {
  if (blocks?.length !== epochsA + epochsB) {
    throw new RangeError(
      `labels within blocks: ${blocks?.length ?? 0} epochs have a block where the plan keeps ${epochsA + epochsB}`,
    );
  }
  const found: { epochs: number[]; a: number }[] = [];
  blocks.forEach((block, n) => {
    found[block] ??= { epochs: [], a: 0 };
    found[block].epochs.push(n);
    if (n < epochsA) found[block].a++;
  });
  return found;
}

/** Draws as those of free labels, with the count of A kept in each block. */
function draw(
  seed: string,
  range: PermutationRange,
  draws: ArrayBufferLike,
  shape: DrawShape,
): void {
  const stride = labelBlockCount(shape.epochsA + shape.epochsB);
  const masks = new Uint8Array(draws);
  const blocks = members(shape);
  for (let p = range.from; p < range.to; p++) {
    const random = permutationGenerator(seed, labelsWithinBlocks.id, p);
    const row = p * stride;
    masks.fill(0, row, row + stride);
    for (const { epochs, a } of blocks) {
      const order = Uint32Array.from(epochs);
      for (let n = 0; n < a; n++) {
        const other = n + random.below(order.length - n);
        const chosen = order[other];
        order[other] = order[n];
        masks[row + Math.floor(chosen / labelBlockBits)] |= 1 << (chosen % labelBlockBits);
      }
    }
  }
}

export const labelsWithinBlocks: NullModel<'labels-within-blocks'> = {
  id: 'labels-within-blocks',
  name: 'Condition labels within blocks',
  shuffles:
    'The labels A and B are dealt anew inside each block of epochs, keeping both counts of every block.',
  underNull:
    'If A and B do not differ, an epoch might as well have carried the other label of its own block; blocks may differ from each other in any way.',
  source:
    'restricted randomisation: Edgington 1969; blocks in permutation tests of recordings, Winkler et al. 2015',
  settings,
  blocksOf,
  needsWholeWindow: false,
  statistic: 'difference',
  statisticName: 'difference A − B',
  exchangesLabels: true,
  mostWindowSamples: Infinity,
  logArrangements: (shape) =>
    members(shape).reduce((sum, { epochs, a }) => sum + logChoose(epochs.length, a), 0),
  hasTwins: (shape) => members(shape).every(({ epochs, a }) => 2 * a === epochs.length),
  drawsByteLength: (shape) => shape.permutations * labelBlockCount(shape.epochsA + shape.epochsB),
  draw,
  sampler: (run) => new LabelSampler(run),
  groups: labelGroups,
};
