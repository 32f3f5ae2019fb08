import { addShiftedLagSigns, sumLagSigns } from '../../kernels/lag-sums';
import { absoluteMeanChance } from '../numbers/chance';
import type { Measure } from './measure';

/** |mean sign of Im c|: how much one site leads more often than it follows. */
export const phaseLagIndex: Measure<'phase-lag-index'> = {
  id: 'phase-lag-index',
  name: 'Phase lag index',
  shortName: 'PLI',
  sentence:
    'How much more often one site leads than it follows, whatever the size of the lag: 0 is equally often, 1 is always.',
  formula: 'PLI = |(1/N) Σₙ sign sin(φⱼₙ − φₖₙ)|, sign 0 = 0',
  source: 'Stam et al. 2007',
  caution:
    'A lag near zero flips sign with little noise, so weak lags are lost; true synchrony at zero lag is missed. It takes N + 1 values at most: ties are many with few epochs.',
  range: [0, 1],
  needsAmplitude: false,
  chance: absoluteMeanChance(1),
  termCount: 1,
  sumTerms: sumLagSigns,
  addShiftedTerms: addShiftedLagSigns,
  values(sums, epochCount, values, count) {
    for (let i = 0; i < count; i++) values[i] = Math.abs(sums[i]) / epochCount;
  },
};
