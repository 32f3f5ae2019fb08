import { ties } from '../ties';
import type { Correction, Evidence } from './correction';
import { ascending, countAtLeast, criticalOf, median } from './distribution';
import { regionEdges } from './edges';
import { mostExceedances, permutationP } from './p-value';
import { clopperPearson } from './clopper-pearson';
import { tailStatistic } from './tail';

function judge(evidence: Evidence) {
  const { maps, tail, alpha, permutations } = evidence;
  const sorted = ascending(maps.maxStatistic);
  const most = mostExceedances(alpha, permutations);
  const exceedances = (feature: number) =>
    countAtLeast(sorted, tailStatistic(maps.z[feature], tail) - ties.z);
  const adjustedP = new Float32Array(maps.z.length);
  const claimed = new Uint8Array(maps.z.length);
  for (let x = 0; x < adjustedP.length; x++) {
    const count = exceedances(x);
    adjustedP[x] = permutationP(count, permutations);
    if (count <= most) claimed[x] = 1;
  }
  const criticalValue = criticalOf(sorted, most);
  return {
    id: maxStatistic.id,
    adjustedP,
    edges: regionEdges(evidence, maxStatistic.id, claimed, (peak) => {
      const count = exceedances(peak);
      return {
        adjustedP: permutationP(count, permutations),
        adjustedPInterval: clopperPearson(count, permutations),
      };
    }),
    criticalValue,
    smallestDifference: criticalValue === null ? null : criticalValue * median(maps.nullSd),
  };
}

export const maxStatistic: Correction<'max-statistic'> = {
  id: 'max-statistic',
  name: 'Maximum statistic',
  family: 'family-wise',
  sentence:
    'Each point is held against the largest value anywhere in each permutation, so the chance of even one false claim stays at alpha.',
  caution: null,
  statistic: '|z|',
  part: null,
  source: 'Westfall and Young 1993 (single step); p with + 1, Phipson and Smyth 2010',
  judge,
};
