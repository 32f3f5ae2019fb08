import type { CorrectionId } from '$engine';
import { packEdges } from '$lib/model/packed-edges';
import type { PairValues } from '$lib/model/result';
import type { Member } from '../access';
import { changesAfterFirstLook } from '../contrasts';
import type { Db } from '../database';
import type { Storage } from '../storage';
import { runClusters, runEdges } from './edges';
import { findFinishedRun, type FoundRun } from './find-run';
import { readMap } from './maps';
import { runNulls } from './nulls';
import { pairPeaks, pairsAtPoint } from './pair-values';
import { sitePositions } from './positions';

/** The plan's correction of this name, or the one that carries its claim. */
export function plannedCorrection(found: FoundRun, wanted: string | null): CorrectionId {
  const planned = found.plan.body.test.corrections;
  return planned.find((id) => id === wanted) ?? planned[0]!;
}

/** Of every pair: its strongest point, or its values at one point. */
export async function pairValues(
  db: Db,
  storage: Storage,
  member: Member,
  found: FoundRun,
  choice: { correction: string; point: number | null },
): Promise<PairValues> {
  const read = (name: string) => readMap(db, storage, member, found.run.id, name);
  const [z, adjustedP] = await Promise.all([read('z'), read(`adjusted-p-${choice.correction}`)]);
  const maps = [z.data as Float32Array, adjustedP.data as Float32Array] as const;
  const pairCount = found.facts.axes.pairs.length;
  if (choice.point !== null) return pairsAtPoint(...maps, pairCount, choice.point);
  return pairPeaks(...maps, pairCount, found.plan.body.test.tail);
}

/** The middle of all features' null standard deviations. */
async function medianNullSd(db: Db, storage: Storage, member: Member, runId: string) {
  const { data } = await readMap(db, storage, member, runId, 'null-sd');
  return Float32Array.from(data).sort()[data.length >> 1] ?? null;
}

/** Everything the result page shows at first sight; slices of maps follow when chosen. */
export async function loadResult(
  db: Db,
  storage: Storage,
  member: Member,
  runId: string,
  wantedCorrection: string | null,
) {
  const found = await findFinishedRun(db, member, runId);
  const { run, plan, facts, contrast } = found;
  const { sites, pairs, frequenciesHz, timesS } = facts.axes;
  const axes = { sites, pairs, frequenciesHz, timesS };
  const correction = plannedCorrection(found, wantedCorrection);
  const pairIndex = new Map(
    axes.pairs.map(([j, k], i) => [`${axes.sites[j]}\n${axes.sites[k]}`, i]),
  );
  const hashes = plan.body.recordings.map(({ sha256 }) => sha256);
  const [edges, clusters, nulls, peaks, positions, firstLook] = await Promise.all([
    runEdges(db, member, runId, correction),
    runClusters(db, member, runId, (j, k) => pairIndex.get(`${j}\n${k}`) ?? -1),
    runNulls(db, member, runId),
    pairValues(db, storage, member, found, { correction, point: null }),
    sitePositions(db, member.teamId, contrast.studyId, hashes, axes.sites),
    changesAfterFirstLook(db, member, plan.id),
  ]);
  return {
    contrast,
    run,
    plan,
    axes,
    correction,
    edges: packEdges(edges),
    clusters,
    nulls,
    peaks,
    positions,
    firstLook,
    // Only an empty result asks what could have been found; a whole map is read for it.
    typicalNullSd: edges.length === 0 ? await medianNullSd(db, storage, member, runId) : null,
  };
}
