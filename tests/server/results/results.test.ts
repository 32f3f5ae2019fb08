import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { connect } from '$lib/server/database/connect';
import { edgesTsv } from '$lib/model/edge-table';
import { unpackEdges } from '$lib/model/packed-edges';
import {
  contrastStage,
  edgesJson,
  findFinishedRun,
  finishedRuns,
  loadResult,
  pairValues,
  runEdges,
} from '$lib/server/results';
import { openRunLab, type RunLab } from '../runs/laboratory';
import { makeMember } from '../contrasts/fixture';

const { db } = connect(process.env['DATABASE_URL']!);
let lab: RunLab;
let runId: string;

beforeAll(async () => {
  lab = await openRunLab(db);
  runId = await lab.begin();
  await lab.store(runId);
});
afterAll(() => db.destroy());

const load = (correction: string | null = null) =>
  loadResult(db, lab.storage, lab.member, runId, correction);

describe('finishedRuns', () => {
  test('lists runs that finished, and no other', async () => {
    const unfinished = await lab.begin();
    const runs = await finishedRuns(db, lab.member, lab.contrastId);
    expect(runs.map(({ id, planVersion }) => [id, planVersion])).toEqual([[runId, 1]]);
    await expect(findFinishedRun(db, lab.member, unfinished)).rejects.toMatchObject({
      status: 404,
    });
  });
});

describe('loadResult', () => {
  test('gives the stored edges of the correction that carries the claim', async () => {
    const result = await load();
    const { outcome } = await lab.compute();
    const computed = outcome.corrections[0]!;
    expect(result.correction).toBe('max-statistic');
    expect(computed.edges.length).toBeGreaterThan(0);
    const edges = unpackEdges(result.edges);
    expect(edges.map(({ pair, z }) => [pair, z]).sort()).toEqual(
      computed.edges.map(({ pair, z }) => [pair, z]).sort(),
    );
  });

  test('takes no correction that the plan does not name', async () => {
    expect((await load('cluster-mass')).correction).toBe('cluster-mass');
    expect((await load('nonsense')).correction).toBe('max-statistic');
  });

  test('gives each pair its strongest point and its smallest adjusted p', async () => {
    const { peaks, axes } = await load();
    const { maps, outcome } = await lab.compute();
    const points = axes.frequenciesHz.length * axes.timesS.length;
    axes.pairs.forEach((_, pair) => {
      const z = Array.from(maps.z.subarray(pair * points, (pair + 1) * points));
      const p = outcome.corrections[0]!.adjustedP.subarray(pair * points, (pair + 1) * points);
      expect(Math.abs(peaks.z[pair]!)).toBe(Math.max(...z.map(Math.abs)));
      expect(z[peaks.point[pair]!]).toBe(peaks.z[pair]);
      expect(peaks.adjustedP[pair]).toBe(Math.min(...p));
    });
  });

  test('knows where the sites lie, from their labels', async () => {
    const { positions, axes } = await load();
    expect(positions.map((position) => position !== null)).toEqual(axes.sites.map(() => true));
  });

  test('is a 404 for another team, like a run that does not exist', async () => {
    const stranger = await makeMember(db, 'lead');
    await expect(loadResult(db, lab.storage, stranger, runId, null)).rejects.toMatchObject({
      status: 404,
    });
    await expect(contrastStage(db, stranger, lab.contrastId)).rejects.toMatchObject({
      status: 404,
    });
  });
});

describe('pairValues', () => {
  test('gives every pair at one point', async () => {
    const found = await findFinishedRun(db, lab.member, runId);
    const { maps } = await lab.compute();
    const points = maps.z.length / found.facts.axes.pairs.length;
    const values = await pairValues(db, lab.storage, lab.member, found, {
      correction: 'cluster-mass',
      point: 4,
    });
    expect(Array.from(values.z)).toEqual([0, 1, 2].map((pair) => maps.z[pair * points + 4]));
    expect(Array.from(values.point)).toEqual([4, 4, 4]);
  });
});

describe('the export', () => {
  test('holds every edge with all its digits, and describes every column', async () => {
    const found = await findFinishedRun(db, lab.member, runId);
    const edges = await runEdges(db, lab.member, runId, 'max-statistic');
    const [head, ...lines] = edgesTsv(edges, found.facts.axes, 'ispc').trimEnd().split('\n');
    const names = head!.split('\t');
    expect(lines.length).toBe(edges.length);
    const first = Object.fromEntries(lines[0]!.split('\t').map((cell, i) => [names[i], cell]));
    expect(Number(first['z'])).toBe(edges[0]!.z);
    expect(first['cluster']).toBe('n/a');
    const sidecar = edgesJson(found, 'max-statistic', edges.length) as {
      Columns: Record<string, { Description: string }>;
      PlanHash: string;
      Cautions: string[];
    };
    expect(Object.keys(sidecar.Columns)).toEqual(names);
    expect(sidecar.PlanHash).toBe(lab.hash);
    expect(sidecar.Cautions.join(' ')).toContain('no basis for a diagnosis');
  });
});
