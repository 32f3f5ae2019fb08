import { readdir, readFile, rm, writeFile } from 'node:fs/promises';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import {
  bytesOf,
  correctionIds,
  factsOf,
  initialSettings,
  nullIds,
  nullModelOf,
  openEdf,
  planHash,
  planSchema,
  type NullModel,
  type Plan,
} from '../../../workers/engine';
import { parseNpy } from '../../../workers/engine/npy';
import { runHeadless, type HeadlessResult } from '../../../workers/headless';
import { smallRecording } from '../run/small-run';
import { contrast, openDesk, type Desk } from './command';

let desk: Desk;
let expected: HeadlessResult;

/** The same plan in this process and thread, for comparison. */
async function inThisThread(plan: Plan): Promise<HeadlessResult> {
  const source = bytesOf(smallRecording());
  const { facts } = await factsOf(await openEdf(source), { sha256: desk.sha256, name: 'rest.edf' });
  return runHeadless(plan, [{ facts, source }]);
}

const run = (out: string, ...more: string[]) =>
  contrast('--plan', desk.at('plan.json'), '--recording', desk.recording, '--out', out, ...more);

const resultIn = async (out: string) =>
  JSON.parse(await readFile(`${out}/result.json`, 'utf8')) as {
    [field: string]: unknown;
    counts: Record<string, number>;
    maps: Record<string, { file: string; shape: number[]; axes: string[] }>;
    axes: { pairs: unknown[]; frequenciesHz: number[]; timesS: number[] };
  };

const rowsOf = (text: string): Record<string, string>[] => {
  const [head = '', ...lines] = text.trimEnd().split('\n');
  const names = head.split('\t');
  return lines.map((line) =>
    Object.fromEntries(line.split('\t').map((cell, i) => [names[i], cell])),
  );
};

beforeAll(async () => {
  desk = await openDesk();
  expected = await inThisThread(desk.plan);
  const { code, stderr } = await run(desk.at('out'), '--workers', '2');
  expect([code, stderr]).toEqual([0, '']);
});
afterAll(() => rm(desk.folder, { recursive: true }));

describe('a finished contrast', () => {
  test('leaves exactly the files it documents, and nothing beside the folder', async () => {
    expect((await readdir(desk.at('out'))).sort()).toEqual(
      [
        'result.json',
        'edges.tsv edges.json edges-cluster-mass.tsv edges-cluster-mass.json',
        'edges-benjamini-hochberg.tsv edges-benjamini-hochberg.json clusters.tsv clusters.json',
        'observed-a.npy observed-b.npy difference.npy z.npy p.npy adjusted-p-max-statistic.npy',
        'adjusted-p-cluster-mass.npy adjusted-p-benjamini-hochberg.npy null-mean.npy null-sd.npy',
        'upper.npy lower.npy lag-a.npy lag-b.npy max-statistic.npy cluster-mass.npy',
      ]
        .join(' ')
        .split(' ')
        .sort(),
    );
    expect((await readdir(desk.folder)).sort()).toEqual(['out', 'plan.json', 'rest.edf']);
  });

  test('states plan, hashes, seed, engine, digest, counts and timings in result.json', async () => {
    const result = await resultIn(desk.at('out'));
    expect(result).toMatchObject({
      format: 'nullwright-result/1',
      plan: desk.plan,
      planHash: await planHash(desk.plan),
      seed: 'tide',
      seedReplaced: null,
      engineVersion: expected.summary.engineVersion,
      digest: expected.summary.digest,
      workers: 2,
      axes: expected.axes,
      lost: expected.summary.lost,
      counts: { plannedA: 29, keptA: 28, plannedB: 26, keptB: 26, pairs: 3, tests: 18 },
    });
    expect(result['recordings']).toEqual([
      { sha256: desk.sha256, file: 'rest.edf', matched: 'as it is', sidecars: [], notices: [] },
    ]);
    expect(Object.values(result['timings'] as object).every((s) => s >= 0)).toBe(true);
  });

  test('writes the same maps as a run in one thread, each with the axes it states', async () => {
    const { maps, axes } = await resultIn(desk.at('out'));
    const read = async (name: string) =>
      parseNpy(await readFile(`${desk.at('out')}/${maps[name]!.file}`));
    const same = {
      'observed-a': expected.maps.observedA,
      'observed-b': expected.maps.observedB,
      difference: expected.maps.observedA.map((a, i) => a - expected.maps.observedB[i]!),
      z: expected.maps.z,
      p: expected.outcome.p,
      upper: expected.maps.upper,
      'adjusted-p-max-statistic': expected.outcome.corrections[0]!.adjustedP,
      'max-statistic': expected.maps.maxStatistic,
    };
    for (const [name, data] of Object.entries(same)) {
      expect((await read(name)).data, name).toEqual(data);
    }
    for (const [name, { shape, axes: over }] of Object.entries(maps)) {
      expect((await read(name)).shape, name).toEqual(shape);
      const lengths = { ...axes, permutation: { length: desk.plan.test.permutations } };
      expect(over.map((axis) => lengths[axis as 'pairs'].length)).toEqual(shape);
    }
  });

  test('lists every edge and cluster, and describes each column beside it', async () => {
    const out = desk.at('out');
    const tables = { edges: 0, 'edges-cluster-mass': 1, 'edges-benjamini-hochberg': 2 };
    for (const [name, index] of Object.entries(tables)) {
      const rows = rowsOf(await readFile(`${out}/${name}.tsv`, 'utf8'));
      const edges = expected.outcome.corrections[index]!.edges;
      expect(rows.map((row) => Number(row['z'])).sort()).toEqual(edges.map(({ z }) => z).sort());
      const sidecar = JSON.parse(await readFile(`${out}/${name}.json`, 'utf8'));
      expect(sidecar).toMatchObject({
        Edges: edges.length,
        Correction: desk.plan.test.corrections[index],
        Digest: expected.summary.digest,
      });
      expect(sidecar.Cautions.join(' ')).toContain('no basis for a diagnosis');
      if (rows[0]) expect(Object.keys(sidecar.Columns)).toEqual(Object.keys(rows[0]));
    }
    const clusters = rowsOf(await readFile(`${out}/clusters.tsv`, 'utf8'));
    expect(expected.outcome.clusters.length).toBeGreaterThan(0);
    expect(
      clusters.map(({ cluster, mass, p }) => [Number(cluster), Number(mass), Number(p)]),
    ).toEqual(expected.outcome.clusters.map(({ mass, p }, i) => [i + 1, mass, p]));
    expect(clusters[0]).toMatchObject({ site_1: 'F3', site_2: 'C3', sign: '1' });
  });
});

describe('the digest', () => {
  test.each([1, 4])('is the same on %i workers', async (workers) => {
    const { code } = await run(desk.at(`w${workers}`), '--workers', String(workers), '--quiet');
    expect(code).toBe(0);
    const result = await resultIn(desk.at(`w${workers}`));
    expect(result).toMatchObject({ workers, digest: expected.summary.digest });
  });

  test.each(nullIds)(
    'under the null %s and every correction is that of a run in one thread',
    async (id) => {
      const { settings } = nullModelOf(id) as NullModel;
      const plan: Plan = {
        ...desk.plan,
        null: id,
        ...(settings && { nullSettings: initialSettings(settings) }),
        test: { ...desk.plan.test, corrections: [...correctionIds] },
      };
      const file = await desk.planFile(`${id}.json`, plan);
      const { code, stderr } = await contrast(
        ...['--plan', file, '--recording', desk.recording, '--out', desk.at(id), '--workers', '2'],
      );
      expect([code, stderr]).toEqual([0, '']);
      const { digest } = (await inThisThread(plan)).summary;
      expect((await resultIn(desk.at(id)))['digest']).toBe(digest);
    },
  );

  test("is another with another seed, which result.json states beside the plan's own", async () => {
    const { code } = await run(desk.at('ebb'), '--seed', 'ebb');
    expect(code).toBe(0);
    const plan = { ...desk.plan, test: { ...desk.plan.test, seed: 'ebb' } };
    expect(await resultIn(desk.at('ebb'))).toMatchObject({
      seed: 'ebb',
      plan,
      seedReplaced: { seed: 'tide', planHash: await planHash(desk.plan) },
      digest: (await inThisThread(plan)).summary.digest,
    });
  });
});

describe('recordings and sidecars', () => {
  test('a recording whose identifying fields the plan knows only blanked is the same', async () => {
    const bytes = smallRecording();
    bytes.set(new TextEncoder().encode('P-9 F 02-MAY-1951 Somebody'.padEnd(80)), 8);
    await writeFile(desk.at('named.edf'), bytes);
    const blanked = smallRecording();
    const encode = (text: string) => new TextEncoder().encode(text.padEnd(80));
    blanked.set(encode('X X X X'), 8);
    blanked.set(encode('Startdate X X X X'), 88);
    const { createHash } = await import('node:crypto');
    const sha256 = createHash('sha256').update(blanked).digest('hex');
    const plan = JSON.parse(JSON.stringify(desk.plan).replaceAll(desk.sha256, sha256)) as Plan;
    const { code, stderr } = await contrast(
      ...['--plan', await desk.planFile('blanked.json', plan)],
      ...['--recording', desk.at('named.edf'), '--out', desk.at('blanked')],
    );
    expect([code, stderr]).toEqual([0, '']);
    expect((await resultIn(desk.at('blanked')))['recordings']).toMatchObject([
      { sha256, file: 'named.edf', matched: 'with its identifying fields blanked' },
    ]);
  });

  test('events beside the recording take the place of its annotations', async () => {
    const events = Array.from(
      { length: 12 },
      (_, i) => `${2 + 4 * i}\t0\t${i % 2 ? 'tap' : 'cue'}`,
    );
    const recording = desk.at('sub-01_task-rest_eeg.edf');
    await writeFile(recording, smallRecording());
    await writeFile(
      desk.at('sub-01_task-rest_events.tsv'),
      ['onset\tduration\ttrial_type', ...events, ''].join('\n'),
    );
    const rule = (label: string) => [
      { kind: 'events' as const, recording: desk.sha256, labels: [label] },
    ];
    const plan = {
      ...desk.plan,
      a: { name: 'cue', rules: rule('cue') },
      b: { name: 'tap', rules: rule('tap') },
    };
    const { code, stderr } = await contrast(
      ...['--plan', await desk.planFile('events.json', plan)],
      ...['--recording', recording, '--out', desk.at('events')],
    );
    expect([code, stderr]).toEqual([0, '']);
    const result = await resultIn(desk.at('events'));
    expect(result.counts).toMatchObject({ keptA: 6, keptB: 6 });
    expect(result['recordings']).toMatchObject([
      { sidecars: [{ kind: 'events', name: 'sub-01_task-rest_events.tsv' }] },
    ]);
  });
});

describe('--example and --help', () => {
  test('the example is a complete plan, and the only thing printed', async () => {
    const { code, stdout, stderr } = await contrast('--example');
    expect([code, stderr]).toEqual([0, '']);
    expect(planSchema.parse(JSON.parse(stdout))).toEqual(JSON.parse(stdout));
  });

  test('the help names every option and exit code', async () => {
    const { code, stdout } = await contrast('--help');
    expect(code).toBe(0);
    for (const name of 'plan recording out overwrite workers seed quiet example help'.split(' ')) {
      expect(stdout).toContain(`--${name}`);
    }
    expect(stdout).toMatch(/0 {2}done {4}1 .* 2 .* 130/);
  });
});
