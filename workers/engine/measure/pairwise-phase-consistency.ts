import { addShiftedCrossTerms, sumCrossTerms } from '../../kernels/cross-sums';
import { consistencyChance } from '../numbers/chance';
import type { Measure } from './measure';

/** The mean cosine between the phase differences of two epochs: (N R^2 - 1) / (N - 1). */
export const pairwisePhaseConsistency: Measure<'pairwise-phase-consistency'> = {
  id: 'pairwise-phase-consistency',
  name: 'Pairwise phase consistency',
  shortName: 'PPC',
  sentence:
    'How alike the phase differences of any two epochs are, on average: ISPC squared, freed of what few epochs add to it.',
  formula: 'PPC = (N R² − 1) / (N − 1)',
  source: 'Vinck et al. 2010',
  caution:
    'It is free of bias, so it can be below zero, and it compares conditions of unequal size. It is on the scale of ISPC squared.',
  range: [-1, 1],
  needsAmplitude: false,
  chance: consistencyChance,
  termCount: 2,
  sumTerms: sumCrossTerms,
  addShiftedTerms: addShiftedCrossTerms,
  values(sums, epochCount, values, count) {
    const pairs = epochCount * (epochCount - 1);
    for (let i = 0; i < count; i++) {
      const re = sums[2 * i];
      const im = sums[2 * i + 1];
      values[i] = Math.max(-1, Math.min(1, (re * re + im * im - epochCount) / pairs));
    }
  },
};
