import type { DrawShape, NullModel, PermutationRange } from './model';
import { permutationGenerator } from './random';
import { ShiftSampler } from './shift-sampler';

/** Shifts are kept as 16-bit numbers. */
const mostSamples = 65_536;

/**
 * Draws: Uint16, `draws[(permutation * siteCount + site) * epochCount + epoch]`, a circular shift of
 * the whole window, uniform in 0 .. windowSamples - 1.
 */
function draw(
  seed: string,
  range: PermutationRange,
  draws: ArrayBufferLike,
  shape: DrawShape,
): void {
  const { siteCount, windowSamples } = shape;
  const epochCount = shape.epochsA + shape.epochsB;
  if (windowSamples > mostSamples) {
    throw new RangeError(
      `time-shift draws: a window of ${windowSamples} samples, at most ${mostSamples}; shorten the window`,
    );
  }
  const shifts = new Uint16Array(draws);
  for (let p = range.from; p < range.to; p++) {
    const random = permutationGenerator(seed, timeShift.id, p);
    const row = p * siteCount * epochCount;
    for (let i = 0; i < siteCount * epochCount; i++) shifts[row + i] = random.below(windowSamples);
  }
}

export const timeShift: NullModel<'time-shift'> = {
  id: 'time-shift',
  name: 'Phase-shuffled by time shift',
  shuffles:
    'Every epoch of every site has its phase series rotated in time, over its whole window, by a shift of its own.',
  underNull: 'The two sites keep no fixed phase relation in time.',
  source: 'circular shifts within the epoch: common practice, no source',
  needsWholeWindow: true,
  statistic: 'z-difference',
  statisticName: 'difference of z, A − B',
  exchangesLabels: false,
  mostWindowSamples: mostSamples,
  // Only one site's shift against the other's makes a difference.
  logArrangements: (shape) => (shape.epochsA + shape.epochsB) * Math.log(shape.windowSamples),
  hasTwins: () => false,
  drawsByteLength: (shape) =>
    shape.permutations * shape.siteCount * (shape.epochsA + shape.epochsB) * 2,
  draw,
  sampler: (run) => new ShiftSampler(run),
};
