import type { Plan } from '../plan';
import { phaseMethod } from '../phase/registry';
import type { Axes, RecordingFacts } from '../types';
import { refuseEmptyReference, refuseForeignUnits, refuseLaplacianWithoutPlaces } from './checks';
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
  refuseForeignUnits(plan, recordings);
  refuseLaplacianWithoutPlaces(plan, recordings);
  const pairs = pairsOf(plan.pairs, plan.sites);
  const frequenciesHz = frequenciesOf(plan, samplingRateHz);
  phaseMethod(plan.phase.method).refuse(plan.phase, frequenciesHz, samplingRateHz);
  const { first, kept } = windowSamples(plan, samplingRateHz);
  assertFeatures(pairs.length, frequenciesHz.length, kept.length);
  const timesS = Array.from(kept, (sample) => (first + sample) / samplingRateHz);
  return { sites: [...plan.sites], pairs, frequenciesHz, timesS, samplingRateHz };
}
