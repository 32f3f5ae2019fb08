import { addShiftedLagWeights, sumLagWeights } from '../../kernels/lag-sums';
import type { Measure } from './measure';

/**
 * ((sum Im)^2 - sum Im^2) / ((sum |Im|)^2 - sum Im^2); 0 where fewer than two epochs have a lag
 * (0/0).
 */
export const debiasedWeightedPhaseLagIndex: Measure<'debiased-weighted-phase-lag-index'> = {
  id: 'debiased-weighted-phase-lag-index',
  name: 'Weighted phase lag index, debiased square',
  shortName: 'wPLI² debiased',
  sentence:
    'The square of the weighted phase lag index, over pairs of different epochs only: freed of what few epochs add to it.',
  formula: '((Σ Im X)² − Σ (Im X)²) / ((Σ |Im X|)² − Σ (Im X)²), X = zⱼ zₖ*',
  source: 'Vinck et al. 2011',
  caution:
    'Epochs of large amplitude weigh more, so a difference of amplitude can move it. It can be below zero.',
  range: [-1, 1],
  needsAmplitude: true,
  chance: null,
  termCount: 3,
  sumTerms: sumLagWeights,
  addShiftedTerms: addShiftedLagWeights,
  values(sums, _epochCount, values, count) {
    for (let i = 0; i < count; i++) {
      const sum = sums[3 * i];
      const size = sums[3 * i + 1];
      const squares = sums[3 * i + 2];
      const weight = size * size - squares;
      // One epoch alone leaves only rounding below.
      values[i] =
        weight > 1e-12 * squares ? Math.max(-1, Math.min(1, (sum * sum - squares) / weight)) : 0;
    }
  },
};
