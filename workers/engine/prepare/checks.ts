import { PlanError } from '../errors';
import type { Plan } from '../plan';
import type { RecordingFacts } from '../types';
import { leastSitesForLaplacian, sitePoints } from './laplacian';
import { listed, planRecordings } from './recordings';

/** Refuses references that leave a site flat, or two sites each other's mirror image. */
export function refuseEmptyReference(plan: Plan): void {
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

/** Refuses the surface Laplacian of too few sites, or of sites that stand nowhere. */
export function refuseLaplacianWithoutPlaces(plan: Plan, recordings: RecordingFacts[]): void {
  if (plan.epoch.reference.kind !== 'laplacian') return;
  if (plan.sites.length < leastSitesForLaplacian) {
    throw new PlanError(
      'epoch.reference',
      `The surface Laplacian of ${plan.sites.length} sites means nothing: take at least ${leastSitesForLaplacian} sites, or another reference.`,
    );
  }
  for (const recording of planRecordings(plan, recordings)) sitePoints(plan, recording);
}

/** Refuses limits in microvolts for sites that are not recorded in volts. */
export function refuseForeignUnits(plan: Plan, recordings: RecordingFacts[]): void {
  const { aboveUv, flatBelowUv } = plan.epoch.reject;
  if (aboveUv === null && flatBelowUv === null) return;
  const foreign = planRecordings(plan, recordings).flatMap((recording) =>
    recording.channels
      .filter((channel) => plan.sites.includes(channel.site) && channel.unit !== 'uV')
      .map((channel) => `${channel.site} (${channel.unit || 'no unit'} in ${recording.name})`),
  );
  if (foreign.length === 0) return;
  throw new PlanError(
    aboveUv !== null ? 'epoch.reject.aboveUv' : 'epoch.reject.flatBelowUv',
    `A limit in µV cannot be held against ${listed(foreign)}: leave the limit empty, or these sites out.`,
  );
}
