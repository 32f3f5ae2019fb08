import type { Correction } from './correction';
import { judgeFalseDiscovery } from './false-discovery';

export const benjaminiHochberg: Correction<'benjamini-hochberg'> = {
  id: 'benjamini-hochberg',
  name: 'Benjamini–Hochberg',
  family: 'false discovery',
  sentence:
    'Of the points claimed, the expected share of false ones stays at alpha; single claims may be false.',
  caution: 'Some of the claimed points are expected to be false, up to the share alpha.',
  statistic: null,
  part: null,
  inflation: () => 1,
  source: 'Benjamini and Hochberg 1995',
  judge: (evidence) => judgeFalseDiscovery(evidence, benjaminiHochberg.id, 1),
};
