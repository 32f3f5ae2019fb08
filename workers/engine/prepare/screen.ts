import type { Plan } from '../plan';
import type { Axes, Epoch, LostEpoch } from '../types';
import { epochReader, type RecordingSource } from './read-epoch';
import { flatError, isConstant, peakToPeak } from './signal';

/**
 * Reads the samples of `epochs` and returns those that break a limit of the plan inside the window
 * without its guard, with the site that breaks it most. Reads nothing when there is no limit.
 * @throws RangeError when a site is flat and the plan has no limit for that: better now than when
 * its phases are asked for.
 */
export async function screenEpochs(
  plan: Plan,
  axes: Axes,
  recordings: RecordingSource[],
  epochs: Epoch[],
): Promise<LostEpoch[]> {
  const { aboveUv, flatBelowUv } = plan.epoch.reject;
  if (aboveUv === null && flatBelowUv === null) return [];
  const reader = epochReader(inMicrovolts(plan), axes, recordings);
  const lost: LostEpoch[] = [];
  for (const epoch of epochs) {
    const samples = await reader.read(epoch);
    if (flatBelowUv === null) refuseFlat(plan.sites, samples, reader.describe(epoch));
    const spans = samples.map((signal) => peakToPeak(signal, reader.guard, reader.windowCount));
    const broken = brokenLimit(spans, aboveUv, flatBelowUv);
    if (!broken) continue;
    const { condition, recording, onsetS, label } = epoch;
    const { reason, site } = broken;
    lost.push({
      ...{ condition, recording, onsetS, label, reason },
      site: plan.sites[site],
      valueUv: spans[site],
    });
  }
  return lost;
}

/** Limits in uV are held against potentials: a surface Laplacian has another unit. */
function inMicrovolts(plan: Plan): Plan {
  if (plan.epoch.reference.kind !== 'laplacian') return plan;
  return { ...plan, epoch: { ...plan.epoch, reference: { kind: 'recorded' } } };
}

function refuseFlat(sites: string[], samples: Float64Array[], where: string): void {
  const flat = samples.findIndex(isConstant);
  if (flat >= 0) throw flatError(sites[flat], where);
}

function brokenLimit(
  spans: number[],
  aboveUv: number | null,
  flatBelowUv: number | null,
): { reason: 'above-limit' | 'flat'; site: number } | null {
  const largest = spans.indexOf(Math.max(...spans));
  if (aboveUv !== null && spans[largest] > aboveUv) return { reason: 'above-limit', site: largest };
  const smallest = spans.indexOf(Math.min(...spans));
  if (flatBelowUv !== null && spans[smallest] < flatBelowUv) {
    return { reason: 'flat', site: smallest };
  }
  return null;
}
