import { byClaim } from '$lib/model/edge-table';
import type { ResultCluster, ResultEdge } from '$lib/model/result';
import type { Member } from '../access';
import type { Db } from '../database';

/** The claimed edges of one correction, smallest adjusted p first, then the strongest. */
export async function runEdges(
  db: Db,
  member: Member,
  runId: string,
  correction: string,
): Promise<ResultEdge[]> {
  const rows = await db
    .selectFrom('edge')
    .leftJoin('cluster', 'cluster.id', 'edge.clusterId')
    .select([
      'edge.pairIndex as pair',
      'edge.fromHz',
      'edge.toHz',
      'edge.fromS',
      'edge.toS',
      'edge.peakHz',
      'edge.peakS',
      'edge.peakPoint',
      'edge.points',
      'edge.observedA',
      'edge.observedB',
      'edge.difference',
      'edge.z',
      'edge.p',
      'edge.pLow',
      'edge.pHigh',
      'edge.adjustedP',
      'edge.adjustedPLow',
      'edge.adjustedPHigh',
      'edge.lagARad',
      'edge.lagBRad',
      'cluster.number as cluster',
    ])
    .where('edge.teamId', '=', member.teamId)
    .where('edge.runId', '=', runId)
    .where('edge.correction', '=', correction)
    .execute();
  return rows.sort(byClaim);
}

/** The run's clusters without their points, the largest mass first. */
export async function runClusters(
  db: Db,
  member: Member,
  runId: string,
  pairOf: (siteJ: string, siteK: string) => number,
): Promise<ResultCluster[]> {
  const rows = await db
    .selectFrom('cluster')
    .select(['number', 'siteJ', 'siteK', 'sign', 'mass', 'size', 'exceedances', 'p'])
    .where('teamId', '=', member.teamId)
    .where('runId', '=', runId)
    .orderBy('number')
    .execute();
  return rows.map(({ siteJ, siteK, ...rest }) => ({ ...rest, pair: pairOf(siteJ, siteK) }));
}
