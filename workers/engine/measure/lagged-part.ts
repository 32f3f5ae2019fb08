import { addShiftedCrossTerms, sumCrossTerms } from '../../kernels/cross-sums';
import { absoluteMeanChance } from '../numbers/chance';
import type { Measure } from './measure';

/** |Im m| of the mean unit vector m at the phase difference: nothing at zero lag. */
export const laggedPart: Measure<'lagged-part'> = {
  id: 'lagged-part',
  name: 'Lagged part of ISPC',
  shortName: 'Lagged part',
  sentence:
    'The part of ISPC that stands across zero lag: sources shared by both sites, which have no lag, leave it at zero.',
  formula: 'L = |Im (1/N) Σₙ exp(i(φⱼₙ − φₖₙ))|',
  source: 'after Nolte et al. 2004',
  caution:
    'It also grows when only the lag moves towards a quarter turn, with the synchrony unchanged; true synchrony at zero lag is missed.',
  range: [0, 1],
  needsAmplitude: false,
  chance: absoluteMeanChance(1 / 2),
  termCount: 2,
  sumTerms: sumCrossTerms,
  addShiftedTerms: addShiftedCrossTerms,
  values(sums, epochCount, values, count) {
    for (let i = 0; i < count; i++) {
      values[i] = Math.min(1, Math.abs(sums[2 * i + 1]) / epochCount);
    }
  },
};
