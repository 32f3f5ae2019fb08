import type { DrawShape, NullModel, PairSampler, PermutationRange, RunInput } from './model';
import { permutationGenerator, shuffle } from './random';
import { conditionSampler } from './condition-sampler';

/** Orders are kept as 16-bit numbers. */
const mostEpochs = 65_536;

/**
 * Draws: Uint16, `draws[(permutation * siteCount + site) * epochCount + n]`, the epoch that stands
 * in place n; places of A hold epochs of A, places of B epochs of B.
 */
function draw(
  seed: string,
  range: PermutationRange,
  draws: ArrayBufferLike,
  shape: DrawShape,
): void {
  const { siteCount, epochsA } = shape;
  const epochCount = epochsA + shape.epochsB;
  if (epochCount > mostEpochs) {
    throw new RangeError(
      `trial-order draws: ${epochCount} epochs, at most ${mostEpochs} can be shuffled; narrow the rules of A or B`,
    );
  }
  const orders = new Uint16Array(draws);
  for (let p = range.from; p < range.to; p++) {
    const random = permutationGenerator(seed, trialOrder.id, p);
    for (let site = 0; site < siteCount; site++) {
      const row = (p * siteCount + site) * epochCount;
      for (let n = 0; n < epochCount; n++) orders[row + n] = n;
      shuffle(orders, row, row + epochsA, random);
      shuffle(orders, row + epochsA, row + epochCount, random);
    }
  }
}

function sampler(run: RunInput): PairSampler {
  const { measure, layout } = run;
  const orders = new Uint16Array(run.draws);
  const epochCount = layout.epochCount;
  const stride = 2 * layout.samplesPerEpoch;
  return conditionSampler(run, ({ j, k, permutation, from, epochs, sums, jStarts, kStarts }) => {
    const jRow = (permutation * layout.siteCount + j) * epochCount + from;
    const kRow = (permutation * layout.siteCount + k) * epochCount + from;
    for (let n = 0; n < epochs; n++) {
      jStarts[n] = (j * epochCount + orders[jRow + n]) * stride;
      kStarts[n] = (k * epochCount + orders[kRow + n]) * stride;
    }
    measure.sumTerms(run.phasors, jStarts, kStarts, sums, {
      epochCount: epochs,
      samplesPerEpoch: layout.samplesPerEpoch,
    });
  });
}

export const trialOrder: NullModel<'trial-order'> = {
  id: 'trial-order',
  name: 'Trial-shuffled',
  shuffles:
    'Within each condition, the order of one site’s epochs against the other’s; every site gets its own independent order.',
  underNull:
    'The two sites are no more synchronous than their own locking to the event makes them.',
  source: 'Lachaux et al. 1999',
  needsWholeWindow: false,
  statistic: 'z-difference',
  statisticName: 'difference of z, A − B',
  drawsByteLength: (shape) =>
    shape.permutations * shape.siteCount * (shape.epochsA + shape.epochsB) * 2,
  draw,
  sampler,
};
