import type { Insertable } from 'kysely';
import { planParts, type Cluster, type Edge, type Outcome } from '$engine';
import type { RunSummary } from '$lib/model/run';
import { resultEdgeOf } from '$lib/model/result-edge';
import type { RunFacts } from '$lib/model/run-facts';
import type { Member } from '../access';
import { record } from '../audit';
import type { Database, Db } from '../database';
import type { Expectation, LockedPlan } from './context';
import type { KeptMap } from './kept-maps';
import { refuseOver } from './runs';

export interface Finished {
  runId: string;
  locked: LockedPlan;
  expectation: Expectation;
  summary: RunSummary;
  outcome: Outcome;
  kept: KeptMap[];
}

/** PostgreSQL takes 65,535 parameters in a statement; an edge has 27. */
const rowsPerInsert = 1000;

/** All of a finished run's rows, or none. */
export async function writeFinished(db: Db, member: Member, finished: Finished): Promise<void> {
  const { runId, locked, summary, outcome, kept } = finished;
  const owner = { teamId: member.teamId, runId };
  await db.transaction().execute(async (trx) => {
    const { state } = await trx
      .selectFrom('run')
      .select('state')
      .where('teamId', '=', member.teamId)
      .where('id', '=', runId)
      .forUpdate()
      .executeTakeFirstOrThrow();
    if (state === 'finished' || state === 'stopped') refuseOver(state);
    await trx.insertInto('nullSummary').values(nullSummaries(owner, finished)).execute();
    const clusterIds = await writeClusters(trx, owner, finished);
    for (const rows of inParts(edgeRows(owner, finished, clusterIds))) {
      await trx.insertInto('edge').values(rows).execute();
    }
    await trx
      .insertInto('storedMap')
      .values(kept.map((map) => ({ ...owner, ...map })))
      .execute();
    await trx
      .updateTable('run')
      .set({
        state: 'finished',
        progress: 1,
        digest: outcome.digest,
        facts: JSON.stringify(factsOf(finished)),
        workerCount: summary.workerCount,
        failure: null,
        heardAt: new Date(),
        finishedAt: new Date(),
      })
      .where('teamId', '=', member.teamId)
      .where('id', '=', runId)
      .execute();
    const detail = { planHash: locked.hash, digest: outcome.digest };
    await record(trx, member, 'run.finished', { type: 'run', id: runId }, detail);
  });
}

/** Keeps the reason with the run; one that is over stays as it is. */
export async function markFailed(
  db: Db,
  member: Member,
  runId: string,
  failure: string,
): Promise<void> {
  const changed = await db
    .updateTable('run')
    .set({ state: 'failed', failure, heardAt: new Date() })
    .where('teamId', '=', member.teamId)
    .where('id', '=', runId)
    .where('state', 'in', ['running', 'paused', 'failed'])
    .returning('id')
    .executeTakeFirst();
  if (changed) await record(db, member, 'run.failed', { type: 'run', id: runId }, { failure });
}

interface Owner {
  teamId: string;
  runId: string;
}

function factsOf({ expectation, summary, outcome, locked }: Finished): RunFacts {
  const planned = { a: 0, b: 0 };
  for (const { condition } of [...expectation.planned, ...expectation.lost])
    planned[condition] += 1;
  const { axes } = expectation;
  const byCorrection = (field: 'smallestDifference' | 'criticalValue') =>
    Object.fromEntries(outcome.corrections.map((each) => [each.id, each[field]]));
  return {
    axes,
    plannedA: planned.a,
    plannedB: planned.b,
    keptA: summary.keptA,
    keptB: summary.keptB,
    lostCount: summary.lost.length,
    lost: summary.lost,
    tests: axes.pairs.length * axes.frequenciesHz.length * axes.timesS.length,
    permutations: locked.plan.test.permutations,
    timings: summary.timings,
    clusters: outcome.clusters.length,
    smallestDifference: byCorrection('smallestDifference'),
    criticalValue: byCorrection('criticalValue'),
  };
}

function nullSummaries(
  owner: Owner,
  { summary, outcome, locked }: Finished,
): Insertable<Database['nullSummary']>[] {
  const critical = (correction: string): number | null =>
    outcome.corrections.find(({ id }) => id === correction)?.criticalValue ?? null;
  return [
    {
      ...owner,
      kind: 'max-statistic',
      ...moments(summary.maxStatistic),
      criticalValue: critical('max-statistic'),
    },
    {
      ...owner,
      kind: 'cluster-mass',
      ...moments(summary.clusterMass),
      criticalValue: critical('cluster-mass'),
    },
    ...planParts(locked.plan.test)
      .filter(([, part]) => part.isMaxima)
      .map(([id]) => ({
        ...owner,
        kind: id,
        ...moments(summary.parts?.[id] ?? []),
        criticalValue: critical(id),
      })),
  ];
}

function moments(surrogates: number[]) {
  const mean = surrogates.reduce((sum, value) => sum + value, 0) / surrogates.length;
  const squares = surrogates.reduce((sum, value) => sum + (value - mean) ** 2, 0);
  return { surrogates, mean, sd: Math.sqrt(squares / (surrogates.length - 1)) };
}

async function writeClusters(db: Db, owner: Owner, finished: Finished): Promise<string[]> {
  const { sites, pairs } = finished.expectation.axes;
  const rows = finished.outcome.clusters.map((cluster: Cluster, index) => ({
    ...owner,
    number: index + 1,
    siteJ: sites[pairs[cluster.pair]![0]]!,
    siteK: sites[pairs[cluster.pair]![1]]!,
    sign: cluster.sign,
    mass: cluster.mass,
    size: cluster.size,
    points: cluster.points,
    exceedances: cluster.exceedances,
    p: cluster.p,
  }));
  const ids = new Map<number, string>();
  for (const part of inParts(rows)) {
    const made = await db.insertInto('cluster').values(part).returning(['id', 'number']).execute();
    for (const { id, number } of made) ids.set(number, id);
  }
  return rows.map(({ number }) => ids.get(number)!);
}

function edgeRows(
  owner: Owner,
  { outcome, expectation }: Finished,
  clusterIds: string[],
): Insertable<Database['edge']>[] {
  const { axes } = expectation;
  return outcome.corrections.flatMap(({ edges }) =>
    edges.map((edge: Edge) => {
      const { pair, cluster, ...values } = resultEdgeOf(edge, axes);
      const [j, k] = axes.pairs[pair]!;
      return {
        ...owner,
        ...values,
        correction: edge.correction,
        pairIndex: pair,
        siteJ: axes.sites[j]!,
        siteK: axes.sites[k]!,
        clusterId: cluster === null ? null : clusterIds[cluster - 1]!,
      };
    }),
  );
}

function* inParts<Row>(rows: Row[]): Generator<Row[]> {
  for (let i = 0; i < rows.length; i += rowsPerInsert) yield rows.slice(i, i + rowsPerInsert);
}
