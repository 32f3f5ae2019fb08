import { addShiftedLagWeights, sumLagWeights } from '../../kernels/lag-sums';
import type { Measure } from './measure';

/** |sum Im X| / sum |Im X| of the cross-spectrum X; 0 where no epoch has a lag (0/0). */
export const weightedPhaseLagIndex: Measure<'weighted-phase-lag-index'> = {
  id: 'weighted-phase-lag-index',
  name: 'Weighted phase lag index',
  shortName: 'wPLI',
  sentence:
    'As the phase lag index, with each epoch weighted by the lagged part of its cross-spectrum: epochs near zero lag count little.',
  formula: 'wPLI = |Σₙ Im Xₙ| / Σₙ |Im Xₙ|, X = zⱼ zₖ*',
  source: 'Vinck et al. 2011',
  caution:
    'Epochs of large amplitude weigh more, so a difference of amplitude can move it. It leans upwards with few epochs: compare conditions of unequal size by the debiased square.',
  range: [0, 1],
  needsAmplitude: true,
  chance: null,
  termCount: 3,
  sumTerms: sumLagWeights,
  addShiftedTerms: addShiftedLagWeights,
  values(sums, _epochCount, values, count) {
    for (let i = 0; i < count; i++) {
      const weight = sums[3 * i + 1];
      // Sums of a group may come as total minus the other group: rounding must not make a lag.
      values[i] = weight > 0 ? Math.min(1, Math.abs(sums[3 * i]) / weight) : 0;
    }
  },
};
