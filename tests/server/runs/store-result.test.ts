import { buffer } from 'node:stream/consumers';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { parseNpy } from '$workers/engine/npy';
import { sentMapNames } from '$lib/model/run-maps';
import { openMap, openSlices, storeResult } from '$lib/server/runs';
import type { Storage } from '$lib/server/storage';
import type { HeadlessResult } from '$workers/headless';
import { makeMember, openDatabase } from '../contrasts/fixture';
import { openRunLab, type RunLab } from './laboratory';

const db = openDatabase();
let lab: RunLab;
let right: HeadlessResult;
beforeAll(async () => {
  lab = await openRunLab(db);
  right = await lab.compute();
});
afterAll(async () => {
  await lab.close();
  await db.destroy();
});

const runRow = (id: string) =>
  db.selectFrom('run').selectAll().where('id', '=', id).executeTakeFirstOrThrow();

const rowsOf = async (runId: string) => {
  const count = (table: 'edge' | 'cluster' | 'nullSummary' | 'storedMap') =>
    db
      .selectFrom(table)
      .select((eb) => eb.fn.countAll<number>().as('n'))
      .where('runId', '=', runId)
      .executeTakeFirstOrThrow();
  return {
    edges: (await count('edge')).n,
    clusters: (await count('cluster')).n,
    nulls: (await count('nullSummary')).n,
    maps: (await count('storedMap')).n,
  };
};

/** A copy that a test may bend. */
const copy = (): HeadlessResult => structuredClone(right);

describe('storeResult', () => {
  it('keeps the run, its null, clusters, edges and maps, concluded on the server', async () => {
    const id = await lab.begin();
    await lab.store(id);
    const run = await runRow(id);
    expect(run).toMatchObject({
      state: 'finished',
      progress: 1,
      digest: right.outcome.digest,
      facts: { keptA: 28, keptB: 26, plannedA: 29, plannedB: 26, lostCount: 1, tests: 18 },
    });
    const edges = right.outcome.corrections.reduce((sum, each) => sum + each.edges.length, 0);
    expect(edges).toBeGreaterThan(0);
    expect(await rowsOf(id)).toEqual({
      edges,
      clusters: right.outcome.clusters.length,
      nulls: 2,
      maps: sentMapNames.length + 1 + lab.plan.test.corrections.length,
    });
  });

  it('finds the planted coupling of F3 and C3 at 10 Hz', async () => {
    const id = await lab.begin();
    await lab.store(id);
    const [edge] = await db
      .selectFrom('edge')
      .select(['siteJ', 'siteK', 'peakHz', 'difference', 'adjustedP', 'adjustedPLow'])
      .where('runId', '=', id)
      .where('correction', '=', 'max-statistic')
      .execute();
    expect(edge).toMatchObject({ siteJ: 'F3', siteK: 'C3', peakHz: 10 });
    expect(edge!.difference).toBeGreaterThan(0.2);
    // (0 + 1) / (99 + 1) is the smallest p that 99 permutations can give.
    expect(edge!.adjustedP).toBeCloseTo(0.01, 12);
    expect(edge!.adjustedPLow).toBeLessThan(edge!.adjustedP);
  });

  it('gives back each map bit for bit, whole or one pair of it', async () => {
    const id = await lab.begin();
    await lab.store(id);
    const whole = await openMap(db, lab.storage, lab.member.teamId, id, 'z');
    const file = parseNpy(new Uint8Array(await buffer(whole.bytes)));
    expect(file.shape).toEqual([3, 2, 3]);
    expect(file.data).toEqual(right.maps.z);
    const slice = await openSlices(db, lab.storage, lab.member.teamId, id, 'upper', [1]);
    const part = parseNpy(new Uint8Array(await buffer(slice.bytes)));
    expect(part.shape).toEqual([2, 3]);
    expect(part.data).toEqual(right.maps.upper.slice(6, 12));
  });

  it('keeps one file for equal maps of two runs', async () => {
    const keys = [];
    for (const id of [await lab.begin(), await lab.begin()]) {
      await lab.store(id);
      const maps = await db
        .selectFrom('storedMap')
        .select('storageKey')
        .where('runId', '=', id)
        .orderBy('name')
        .execute();
      keys.push(maps);
    }
    expect(keys[0]).toEqual(keys[1]);
  });
});

type Bend = (result: HeadlessResult) => void;
const tampered: [string, string, Bend][] = [
  ['a digest of another run', 'digest-mismatch', (r) => (r.summary.digest = 'a'.repeat(64))],
  ['one exceedance more', 'digest-mismatch', (r) => (r.maps.upper[0]! += 1)],
  ['a larger z', 'digest-mismatch', (r) => (r.maps.z[7] = 9)],
  ['NaN in z', 'map-value', (r) => (r.maps.z[3] = NaN)],
  ['an infinite null mean', 'map-value', (r) => (r.maps.nullMean[3] = Infinity)],
  ['an observed value above 1', 'map-value', (r) => (r.maps.observedA[0] = 1.5)],
  ['a negative spread', 'map-value', (r) => (r.maps.nullSd[0] = -0.1)],
  ['a lag beyond half a turn', 'map-value', (r) => (r.maps.lagA[0] = 4)],
  ['more exceedances than permutations', 'map-value', (r) => (r.maps.lower[0] = 100)],
  ['counts that leave surrogates out', 'map-value', (r) => r.maps.upper.fill(0)],
  ['a histogram of too many', 'map-value', (r) => (r.maps.histogram[5]! += 1000)],
  ['another plan', 'plan-mismatch', (r) => (r.summary.planHash = 'b'.repeat(64))],
  ['another engine', 'engine-mismatch', (r) => (r.summary.engineVersion = '0')],
  ['an epoch lost for no reason', 'epochs-mismatch', (r) => losing(r, 'by-hand')],
  ['an epoch kept that the facts rule out', 'epochs-mismatch', (r) => (r.summary.lost = [])],
  ['a short distribution', 'distribution-wrong', (r) => r.summary.maxStatistic.pop()],
  ['a negative mass', 'distribution-wrong', (r) => (r.summary.clusterMass[4] = -1)],
];

function losing(result: HeadlessResult, reason: 'by-hand') {
  const { recording, label } = result.summary.lost[0]!;
  result.summary.lost.push({ condition: 'a', recording, onsetS: 5, label, reason });
}

describe('a result that was tampered with', () => {
  it.each(tampered)('is refused: %s', async (_what, code, bend) => {
    const id = await lab.begin();
    const result = copy();
    bend(result);
    await expect(lab.store(id, result)).rejects.toMatchObject({ name: 'ResultRefused', code });
    const run = await runRow(id);
    expect(run.state).toBe('failed');
    expect(run.failure).toBeTruthy();
    expect(await rowsOf(id)).toEqual({ edges: 0, clusters: 0, nulls: 0, maps: 0 });
  });

  it('may be sent again, right this time', async () => {
    const id = await lab.begin();
    const result = copy();
    result.maps.z[3] = NaN;
    await expect(lab.store(id, result)).rejects.toThrow();
    await lab.store(id);
    expect(await runRow(id)).toMatchObject({ state: 'finished', failure: null });
  });
});

describe('a map that is replaced while its result is checked', () => {
  it('is refused, and never lies under the hash of the map that was checked', async () => {
    const id = await lab.begin();
    const result = copy();
    result.maps.nullMean[0]! += 0.125;
    // After the last map is read, and before the maps are kept.
    const storage: Storage = {
      ...lab.storage,
      async read(key, offset, length) {
        const bytes = await lab.storage.read(key, offset, length);
        if (key === `staging/${id}/lower.npy` && offset > 0) {
          const name = `staging/${id}/null-mean.npy`;
          const other = await lab.storage.read(name, 0, await lab.storage.size(name));
          other[other.length - 1]! ^= 1;
          await lab.storage.put(name, other);
        }
        return bytes;
      },
    };
    await expect(
      storeResult(db, storage, lab.member, id, result, result.summary),
    ).rejects.toMatchObject({ name: 'ResultRefused', code: 'map-changed' });
    expect((await runRow(id)).state).toBe('failed');
    // The map that was checked can still be kept, by its own bytes.
    await lab.store(id, result);
    const kept = await openMap(db, lab.storage, lab.member.teamId, id, 'null-mean');
    const file = parseNpy(new Uint8Array(await buffer(kept.bytes)));
    expect(file.data).toEqual(result.maps.nullMean);
  });
});

describe('a finished run', () => {
  it('is stored once when two results arrive together', async () => {
    const id = await lab.begin();
    const outcomes = await Promise.allSettled([lab.store(id), lab.store(id)]);
    expect(outcomes.map(({ status }) => status).sort()).toEqual(['fulfilled', 'rejected']);
    expect(await runRow(id)).toMatchObject({ state: 'finished', failure: null });
  });

  it('takes no second result', async () => {
    const id = await lab.begin();
    await lab.store(id);
    await expect(lab.store(id)).rejects.toMatchObject({ status: 409 });
  });

  it('cannot be changed in the database, nor can what it found', async () => {
    const id = await lab.begin();
    await lab.store(id);
    const changes = [
      db.updateTable('run').set({ failure: 'x' }).where('id', '=', id),
      db.deleteFrom('run').where('id', '=', id),
      db.updateTable('edge').set({ adjustedP: 0.001 }).where('runId', '=', id),
      db.deleteFrom('edge').where('runId', '=', id),
      db.deleteFrom('storedMap').where('runId', '=', id),
      db.updateTable('nullSummary').set({ mean: 0 }).where('runId', '=', id),
      db.updateTable('cluster').set({ p: 0.5 }).where('runId', '=', id),
    ];
    for (const change of changes) {
      await expect(change.execute()).rejects.toThrow('is finished and cannot change');
    }
  });

  it('does not exist for another team', async () => {
    const id = await lab.begin();
    await lab.store(id);
    const stranger = await makeMember(db);
    await expect(openMap(db, lab.storage, stranger.teamId, id, 'z')).rejects.toMatchObject({
      status: 404,
    });
  });
});
