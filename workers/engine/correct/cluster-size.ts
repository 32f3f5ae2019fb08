import { clusterForest, joinClusters, releaseClusters } from '../../kernels/clusters';
import type { CorrectionOutcome } from '../types';
import { clopperPearson } from './clopper-pearson';
import type { Correction, Evidence } from './correction';
import { ascending, countAtLeast, criticalOf } from './distribution';
import { edgeOf } from './edges';
import { mostExceedances, permutationP } from './p-value';
import { featuresOf, maximaPart } from './part';
import { signedPoints } from './signed-points';
import { tailSigns } from './tail';

/** Points of the largest cluster of a z map, over the tail's signs. */
const largestSize = maximaPart((context) => {
  const { tail, clusterFormingZ } = context.test;
  const size = featuresOf(context);
  const timeCount = context.axes.timesS.length;
  const forest = clusterForest(size);
  const points = new Int32Array(size);
  // With a weight of 1 everywhere, a cluster's mass is its size.
  const ones = new Float32Array(size).fill(1);
  return (z) => {
    let largest = 0;
    for (const sign of tailSigns(tail)) {
      const pointCount = signedPoints(z, 0, sign, clusterFormingZ, points);
      if (pointCount <= largest) continue;
      largest = Math.max(largest, joinClusters(ones, 0, points, forest, { pointCount, timeCount }));
      releaseClusters(points, pointCount, forest);
    }
    return largest;
  };
});

function judge(evidence: Evidence): CorrectionOutcome {
  const { axes, maps, alpha, permutations, clusters } = evidence;
  const featureCount = axes.frequenciesHz.length * axes.timesS.length;
  const most = mostExceedances(alpha, permutations);
  const sorted = ascending(maps.parts[clusterSize.id]);
  const adjustedP = new Float32Array(maps.z.length).fill(1);
  const edges = [];
  for (const [index, cluster] of clusters.entries()) {
    const count = countAtLeast(sorted, cluster.size);
    const p = permutationP(count, permutations);
    for (const point of cluster.points) adjustedP[cluster.pair * featureCount + point] = p;
    if (count > most) continue;
    const adjusted = { adjustedP: p, adjustedPInterval: clopperPearson(count, permutations) };
    edges.push(edgeOf(evidence, clusterSize.id, cluster.pair, cluster.points, adjusted, index));
  }
  const critical = criticalOf(sorted, most);
  return {
    id: clusterSize.id,
    adjustedP,
    edges,
    criticalValue: critical === null ? null : critical + 1,
    // A size is reached by small differences as by large ones: no single one stands for it.
    smallestDifference: null,
  };
}

export const clusterSize: Correction<'cluster-size'> = {
  id: 'cluster-size',
  name: 'Time–frequency clusters (size)',
  family: 'family-wise',
  statistic: 'cluster size, points',
  sentence:
    'Neighbouring points above the forming threshold are joined within a pair, and their number is held against the largest such number anywhere in each permutation.',
  caution:
    'The claim is about the cluster as a whole, not about each of its points, its onset or its extent.',
  source: 'Maris and Oostenveld 2007; cluster extent as statistic, Nichols and Holmes 2002',
  part: largestSize,
  judge,
};
