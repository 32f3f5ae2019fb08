import { PlanError } from '../errors';
import type { Plan } from '../plan';
import type { Axes, RecordingFacts } from '../types';
import { frequenciesOf, windowSamples } from './grid';
import { assertFeatures, pairsOf } from './pairs';
import { commonRate } from './recordings';

/**
 * The axes of every map of a run: sites, pairs, frequencies (Hz), kept times (s, of the samples
 * themselves) and the sampling rate (Hz). Pure; reads no samples.
 * @throws PlanError when the plan does not fit the recordings, naming field, value and remedy.
 */
export function axesOf(plan: Plan, recordings: RecordingFacts[]): Axes {
  refuseEmptyReference(plan);
  const samplingRateHz = commonRate(plan, recordings);
  const pairs = pairsOf(plan.pairs, plan.sites);
  const frequenciesHz = frequenciesOf(plan, samplingRateHz);
  const { first, kept } = windowSamples(plan, samplingRateHz);
  assertFeatures(pairs.length, frequenciesHz.length, kept.length);
  const timesS = Array.from(kept, (sample) => (first + sample) / samplingRateHz);
  return { sites: [...plan.sites], pairs, frequenciesHz, timesS, samplingRateHz };
}

/** References that leave a site flat, or two sites each other's mirror image. */
function refuseEmptyReference(plan: Plan): void {
  const { reference } = plan.epoch;
  if (reference.kind === 'average' && plan.sites.length === 2) {
    throw new PlanError(
      'epoch.reference',
      'The mean of two sites makes each the mirror image of the other: take more sites or another reference.',
    );
  }
  if (reference.kind !== 'channels') return;
  const [site] = reference.sites;
  if (new Set(reference.sites).size === 1 && plan.sites.includes(site)) {
    throw new PlanError(
      'epoch.reference',
      `${site} is the reference and analysed too, and would be flat: leave it out of the sites, or add sites to the reference.`,
    );
  }
}
