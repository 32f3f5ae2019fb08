import { createHash } from 'node:crypto';
import { Readable } from 'node:stream';
import { conclude, type ClaimMaps, type Outcome, type RunMaps } from '$engine';
import type { RunSummary } from '$lib/model/run';
import { npyParts, type NpyArray, type NpyHeader } from '$workers/engine/npy';
import { mapField, mapShape, sentMapNames, sentMaps, type SentMapName } from '$lib/model/run-maps';
import type { Member } from '../access';
import type { Db } from '../database';
import type { Storage } from '../storage';
import { checkHistogram, checkMapValues } from './check-maps';
import { checkSummary } from './check-summary';
import { expectationOf, planById, type Expectation, type LockedPlan } from './context';
import { keepByHash, type KeptMap } from './kept-maps';
import { ResultRefused } from './refused';
import { getRun, refuseOver, requireStarter } from './runs';
import { checkHeader, openStaged, readStaged, removeStaged, stageMap } from './staging';
import { markFailed, writeFinished } from './write-finished';

/**
 * Finishes a run from the maps that wait for it and the browser's summary. Nothing in them is
 * believed: shapes, ranges and epochs are held against the plan and the database's facts, and
 * p, adjusted p, clusters, edges and digest are concluded here again.
 * @throws ResultRefused after marking the run failed with the reason.
 */
export async function finishRun(
  db: Db,
  storage: Storage,
  member: Member,
  runId: string,
  summary: RunSummary,
): Promise<void> {
  return inTurn(() => finishInTurn(db, storage, member, runId, summary));
}

let last: Promise<void> = Promise.resolve();

/** A result takes some hundred megabytes while it is checked: one at a time, whoever sends them. */
function inTurn(work: () => Promise<void>): Promise<void> {
  const mine = last.then(work);
  last = mine.catch(() => undefined);
  return mine;
}

async function finishInTurn(
  db: Db,
  storage: Storage,
  member: Member,
  runId: string,
  summary: RunSummary,
): Promise<void> {
  const run = await getRun(db, member.teamId, runId);
  requireStarter(member, run.startedBy);
  if (run.state === 'finished' || run.state === 'stopped') refuseOver(run.state);
  const locked = await planById(db, member.teamId, run.planId);
  const expectation = await expectationOf(db, member.teamId, locked);
  try {
    checkSummary(summary, locked, expectation);
    const { maps, sha256s } = await readMaps(storage, runId, summary, locked, expectation);
    const outcome = await concludeAgain(maps, summary, locked, expectation);
    const kept = await keepMaps(storage, runId, summary, expectation, outcome, sha256s);
    await writeFinished(db, member, { runId, locked, expectation, summary, outcome, kept });
    await removeStaged(storage, runId, sentMapNames);
  } catch (reason) {
    if (reason instanceof ResultRefused) await markFailed(db, member, runId, reason.message);
    throw reason;
  }
}

/** For a run computed in this process (the demo): stages its maps, then finishes like any other. */
export async function storeResult(
  db: Db,
  storage: Storage,
  member: Member,
  runId: string,
  result: { maps: RunMaps; phases: Uint8Array },
  summary: RunSummary,
): Promise<void> {
  const run = await getRun(db, member.teamId, runId);
  const locked = await planById(db, member.teamId, run.planId);
  const { axes } = await expectationOf(db, member.teamId, locked);
  const epochCount = summary.keptA + summary.keptB;
  for (const name of sentMapNames) {
    const data = name === 'phases' ? result.phases : result.maps[mapField[name]];
    const file = Readable.from(npyParts(data, mapShape(name, axes, epochCount)), {
      objectMode: false,
    });
    await stageMap(storage, runId, name, file, (header) =>
      checkHeader(name, header, axes, { exactly: epochCount }),
    );
  }
  await finishRun(db, storage, member, runId, summary);
}

async function readMaps(
  storage: Storage,
  runId: string,
  summary: RunSummary,
  { plan }: LockedPlan,
  { axes }: Expectation,
): Promise<{ maps: ClaimMaps; sha256s: Map<SentMapName, string> }> {
  const sha256s = new Map<SentMapName, string>();
  const exactly = summary.keptA + summary.keptB;
  const read = async <T extends NpyArray>(name: SentMapName): Promise<T> => {
    const check = (header: NpyHeader): void => checkHeader(name, header, axes, { exactly });
    const { data, sha256 } = await readStaged(storage, runId, name, check);
    sha256s.set(name, sha256);
    // The header check holds the dtype, so the array is of the type the caller names.
    return data as T;
  };
  const observedA = await read<Float32Array>('observed-a');
  const observedB = await read<Float32Array>('observed-b');
  const nullMean = await read<Float32Array>('null-mean');
  checkMapValues(
    { 'observed-a': observedA, 'observed-b': observedB, 'null-mean': nullMean },
    plan,
    axes,
  );
  // Read to be checked only; conclusions are drawn without them.
  const { permutations } = plan.test;
  checkHistogram(await read<Uint16Array>('null-histogram'), permutations, axes);
  await read<Uint8Array>('phases');
  const maps = {
    observedA,
    observedB,
    lagA: await read<Float32Array>('lag-a'),
    lagB: await read<Float32Array>('lag-b'),
    nullSd: await read<Float32Array>('null-sd'),
    z: await read<Float32Array>('z'),
    upper: await read<Uint32Array>('upper'),
    lower: await read<Uint32Array>('lower'),
    maxStatistic: Float32Array.from(summary.maxStatistic),
    maxClusterMass: Float32Array.from(summary.clusterMass),
    parts: Object.fromEntries(
      Object.entries(summary.parts ?? {}).map(([id, list]) => [id, Float32Array.from(list)]),
    ),
  };
  return { maps, sha256s };
}

async function concludeAgain(
  maps: ClaimMaps,
  summary: RunSummary,
  { plan }: LockedPlan,
  { axes }: Expectation,
): Promise<Outcome> {
  const counts = { epochsA: summary.keptA, epochsB: summary.keptB };
  const outcome = await conclude(plan, axes, counts, maps).catch((reason: unknown) => {
    if (reason instanceof RangeError) throw new ResultRefused('map-value', reason.message);
    throw reason;
  });
  if (outcome.digest !== summary.digest) {
    throw new ResultRefused(
      'digest-mismatch',
      `The result's digest is ${summary.digest.slice(0, 8)}, but its maps give ${outcome.digest.slice(0, 8)}.`,
    );
  }
  return outcome;
}

async function keepMaps(
  storage: Storage,
  runId: string,
  summary: RunSummary,
  { axes }: Expectation,
  outcome: Outcome,
  sha256s: Map<SentMapName, string>,
): Promise<KeptMap[]> {
  const kept: KeptMap[] = [];
  const epochCount = summary.keptA + summary.keptB;
  for (const name of sentMapNames) {
    const shape = mapShape(name, axes, epochCount);
    const stored = await keepByHash(storage, sha256s.get(name)!, () =>
      openStaged(storage, runId, name),
    );
    kept.push({ name, dtype: sentMaps[name].dtype, shape, ...stored });
  }
  const shape = mapShape('z', axes, epochCount);
  const made = [
    { name: 'p', data: outcome.p },
    ...outcome.corrections.map(({ id, adjustedP }) => ({
      name: `adjusted-p-${id}`,
      data: adjustedP,
    })),
  ];
  for (const { name, data } of made) {
    const parts = npyParts(data, shape);
    const sha256 = createHash('sha256').update(parts[0]).update(parts[1]).digest('hex');
    const stored = await keepByHash(storage, sha256, () => Readable.from(parts));
    kept.push({ name, dtype: '<f4', shape, ...stored });
  }
  return kept;
}
