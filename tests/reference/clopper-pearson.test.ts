import jStat from 'jstat';
import { expect, test } from 'vitest';
import { clopperPearson } from '../../workers/engine/correct/clopper-pearson';

/**
 * Against the beta distribution of jStat, which is no code of ours. The bounds are where it has
 * the tail's probability; its own distribution function holds about 10 digits. COMP
 */
test('the bounds of an interval leave 2.5 % of the beta distribution on each side', () => {
  for (const trials of [19, 99, 999, 10_000]) {
    for (const hits of [1, Math.round(trials * 0.05), Math.round(trials / 2), trials - 1]) {
      const [low, high] = clopperPearson(hits, trials);
      const below = jStat.beta.cdf(low, hits, trials - hits + 1);
      const above = 1 - jStat.beta.cdf(high, hits + 1, trials - hits);
      expect(below, `low of ${hits} in ${trials}`).toBeCloseTo(0.025, 8);
      expect(above, `high of ${hits} in ${trials}`).toBeCloseTo(0.025, 8);
    }
  }
});
