import { cumulativeStdNormalProbability } from 'simple-statistics';
import { said, type CautionRule } from './caution';

/** Pairs that can form a component larger than two edges. */
const fewestPairs = 3;
/** What all workers may hold of edges beyond the threshold before they are merged. */
const mostBytes = 2 ** 30;

export const componentsOfFewPairs: CautionRule = ({ plan, axes }) => {
  if (!plan.test.corrections.includes('network-components')) return null;
  if (axes.pairs.length >= fewestPairs) return null;
  return {
    code: 'components-of-few-pairs',
    severity: 'stop',
    message: `Network components make no sense of ${said(axes.pairs.length)} ${axes.pairs.length === 1 ? 'pair' : 'pairs'}: there is nothing to join. Take more pairs, or another correction.`,
  };
};

export const componentsMemory: CautionRule = ({ plan, facts }) => {
  const { corrections, clusterFormingZ, permutations, tail } = plan.test;
  if (!corrections.includes('network-components')) return null;
  const sides = tail === 'two-sided' ? 2 : 1;
  const share = sides * (1 - cumulativeStdNormalProbability(clusterFormingZ));
  const bytes = 4 * facts.tests * permutations * share;
  if (bytes <= mostBytes) return null;
  return {
    code: 'components-memory',
    severity: 'stop',
    message: `Network components would hold about ${(bytes / 2 ** 30).toFixed(1)} GB of pairs beyond the forming threshold, and ${(mostBytes / 2 ** 30).toFixed(1)} GB are the most: raise the cluster-forming z, or take fewer permutations, frequencies or times.`,
  };
};
