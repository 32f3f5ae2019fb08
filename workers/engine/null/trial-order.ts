import { logFactorial } from '../numbers/counting';
import { orderGroups } from './order-groups';
import type { DrawShape, NullModel, PairSampler, PermutationRange, RunInput } from './model';
import { permutationGenerator, shuffle } from './random';

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
  const { measure, layout, shape, featureCount } = run;
  const { epochCount, samplesPerEpoch, siteCount } = layout;
  const orders = new Uint16Array(run.draws);
  const stride = 2 * samplesPerEpoch;
  const most = Math.max(shape.epochsA, shape.epochsB);
  const jStarts = new Int32Array(most);
  const kStarts = new Int32Array(most);
  const sums = new Float64Array(featureCount * measure.termCount);
  const values = new Float64Array(featureCount);

  function place(starts: Int32Array, site: number, p: number, from: number, epochs: number): void {
    const row = (p * siteCount + site) * epochCount + from;
    for (let n = 0; n < epochs; n++) starts[n] = (site * epochCount + orders[row + n]) * stride;
  }

  return {
    surrogates(j, k, range, first, second) {
      for (let p = range.from; p < range.to; p++) {
        for (const [from, epochs, out] of [
          [0, shape.epochsA, first],
          [shape.epochsA, shape.epochsB, second],
        ] as const) {
          place(jStarts, j, p, from, epochs);
          place(kStarts, k, p, from, epochs);
          measure.sumTerms(run.phasors, jStarts, kStarts, sums, {
            epochCount: epochs,
            sampleCount: featureCount,
            partDistance: samplesPerEpoch,
          });
          measure.values(sums, epochs, values, featureCount);
          out.set(values, (p - range.from) * featureCount);
        }
      }
    },
  };
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
  exchangesLabels: false,
  mostWindowSamples: Infinity,
  // Only the order of one site's epochs against the other's makes a difference.
  logArrangements: (shape) => logFactorial(shape.epochsA) + logFactorial(shape.epochsB),
  hasTwins: () => false,
  drawsByteLength: (shape) =>
    shape.permutations * shape.siteCount * (shape.epochsA + shape.epochsB) * 2,
  draw,
  sampler,
  groups: orderGroups,
};
