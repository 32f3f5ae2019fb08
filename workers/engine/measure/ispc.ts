import { addShiftedCrossTerms, sumCrossTerms } from '../../kernels/cross-sums';
import { resultantLengths } from '../../kernels/resultants';
import { ispcChance } from '../numbers/chance';
import type { Measure } from './measure';

/** Inter-site phase clustering over trials, R = |mean of exp(i (phi_j - phi_k))|. */
export const ispc: Measure<'ispc'> = {
  id: 'ispc',
  name: 'ISPC over trials',
  shortName: 'ISPC',
  sentence:
    'How alike the phase difference of two sites is from epoch to epoch: 0 is no preferred difference, 1 is always the same.',
  formula: 'R = |(1/N) Σₙ exp(i(φⱼₙ − φₖₙ))|',
  source: 'Lachaux et al. 1999',
  // What few and unequal epochs do to it is said where the counts are known.
  caution: null,
  needsAmplitude: false,
  chance: ispcChance,
  range: [0, 1],
  termCount: 2,
  isResultantLength: true,
  sumTerms: sumCrossTerms,
  addShiftedTerms: addShiftedCrossTerms,
  values: resultantLengths,
};
