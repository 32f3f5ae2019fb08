import type { CorrectionOutcome } from '../types';
import { ties } from '../ties';
import { clopperPearson } from './clopper-pearson';
import type { Correction, Evidence } from './correction';
import { ascending, criticalOf } from './distribution';
import { edgeOf } from './edges';
import { mostExceedances } from './p-value';

function judge(evidence: Evidence): CorrectionOutcome {
  const { axes, maps, alpha, permutations, clusters } = evidence;
  const featureCount = axes.frequenciesHz.length * axes.timesS.length;
  const most = mostExceedances(alpha, permutations);
  const adjustedP = new Float32Array(maps.z.length).fill(1);
  const edges = [];
  for (const [index, cluster] of clusters.entries()) {
    for (const point of cluster.points) adjustedP[cluster.pair * featureCount + point] = cluster.p;
    if (cluster.exceedances > most) continue;
    const adjusted = {
      adjustedP: cluster.p,
      adjustedPInterval: clopperPearson(cluster.exceedances, permutations),
    };
    edges.push(edgeOf(evidence, clusterMass.id, cluster.pair, cluster.points, adjusted, index));
  }
  const critical = criticalOf(ascending(maps.maxClusterMass), most);
  return {
    id: clusterMass.id,
    adjustedP,
    edges,
    criticalValue: critical === null ? null : critical * (1 + ties.mass),
    // A mass is reached by few large or many small differences: no single one stands for it.
    smallestDifference: null,
  };
}

export const clusterMass: Correction<'cluster-mass'> = {
  id: 'cluster-mass',
  name: 'Time–frequency clusters (mass)',
  family: 'family-wise',
  sentence:
    'Neighbouring points above the forming threshold are joined within a pair, and the sum of their |z| is held against the largest such sum anywhere in each permutation.',
  caution:
    'The claim is about the cluster as a whole, not about each of its points, its onset or its extent.',
  statistic: 'cluster mass',
  part: null,
  source: 'Maris and Oostenveld 2007',
  judge,
};
