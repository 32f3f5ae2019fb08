import { benjaminiHochberg } from './benjamini-hochberg';
import { benjaminiYekutieli } from './benjamini-yekutieli';
import { clusterMass } from './cluster-mass';
import { clusterSize } from './cluster-size';
import { maxStatistic } from './max-statistic';
import { networkComponents } from './network-components';
import { stepDownMaximum } from './step-down-maximum';
import { thresholdFreeEnhancement } from './threshold-free-enhancement';

/** In the order the form shows them. */
export const corrections = [
  maxStatistic,
  stepDownMaximum,
  clusterMass,
  clusterSize,
  thresholdFreeEnhancement,
  networkComponents,
  benjaminiHochberg,
  benjaminiYekutieli,
] as const;

export type CorrectionId = (typeof corrections)[number]['id'];

/** Ids in the order the form shows them. */
export const correctionIds = corrections.map((correction) => correction.id) as [
  CorrectionId,
  ...CorrectionId[],
];

/** @throws RangeError for an id that is not registered. */
export function correctionOf(id: CorrectionId): (typeof corrections)[number] {
  const found = corrections.find((correction) => correction.id === id);
  if (!found) throw new RangeError(`correction "${String(id)}" is not registered`);
  return found;
}
