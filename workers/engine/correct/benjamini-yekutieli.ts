import type { Correction } from './correction';
import { judgeFalseDiscovery } from './false-discovery';

/** 1 + 1/2 + ... + 1/m: what tests that depend on each other in any way may cost. */
export function harmonic(tests: number): number {
  let sum = 0;
  // From the small terms up, so that none is lost.
  for (let i = tests; i >= 1; i--) sum += 1 / i;
  return sum;
}

export const benjaminiYekutieli: Correction<'benjamini-yekutieli'> = {
  id: 'benjamini-yekutieli',
  name: 'Benjamini–Yekutieli',
  family: 'false discovery',
  sentence:
    'As Benjamini–Hochberg, for tests that depend on each other in any way: p is multiplied by 1 + 1/2 + … + 1/m of the m tests.',
  caution:
    'Some of the claimed points are expected to be false, up to the share alpha. The price for any dependence is high: with many tests little is claimed.',
  statistic: null,
  part: null,
  inflation: harmonic,
  source: 'Benjamini and Yekutieli 2001',
  judge: (evidence) =>
    judgeFalseDiscovery(evidence, benjaminiYekutieli.id, harmonic(evidence.p.length)),
};
