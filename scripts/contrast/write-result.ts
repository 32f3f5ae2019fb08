import { writeFile } from 'node:fs/promises';
import path from 'node:path';
import { planEpochs, type LostEpoch } from '$engine';
import { clustersSidecar, clustersTsv } from '$lib/model/cluster-table';
import { byClaim, edgesSidecar, edgesTsv, type TableOrigin } from '$lib/model/edge-table';
import { resultEdgeOf } from '$lib/model/result-edge';
import type { WholeRun } from '$workers/run/whole-run';
import { writeMaps } from './maps';
import type { GivenPlan } from './plan-file';
import type { MatchedRecording } from './recordings';

export const resultFormat = 'nullwright-result/1';

/** Writes everything that a run leaves into a folder. */
export async function writeResult(
  folder: string,
  given: GivenPlan,
  recordings: MatchedRecording[],
  run: WholeRun,
): Promise<void> {
  const { summary } = run;
  const origin: TableOrigin = {
    plan: given.plan,
    planHash: given.hash,
    epochsA: summary.keptA,
    epochsB: summary.keptB,
    seed: given.plan.test.seed,
    engineVersion: summary.engineVersion,
    digest: summary.digest,
    finishedAt: new Date(),
  };
  await writeTables(folder, run, origin);
  const maps = await writeMaps(folder, run);
  const { plan, planHash, seed, engineVersion, digest, finishedAt } = origin;
  await writeJson(folder, 'result.json', {
    format: resultFormat,
    use: 'For research. Not a medical device, and no basis for a diagnosis.',
    plan,
    planHash,
    seed,
    seedReplaced: given.replaced,
    recordings: recordings.map(describedRecording),
    engineVersion,
    digest,
    workers: summary.workerCount,
    finishedAt: finishedAt.toISOString(),
    timings: summary.timings,
    counts: countsOf(given, recordings, run),
    corrections: run.outcome.corrections.map(
      ({ id, edges, criticalValue, smallestDifference }) => ({
        ...{ id, edges: edges.length, criticalValue, smallestDifference },
      }),
    ),
    lost: summary.lost,
    axes: run.axes,
    maps,
  });
}

async function writeTables(folder: string, run: WholeRun, origin: TableOrigin): Promise<void> {
  const { axes, outcome } = run;
  for (const [i, id] of origin.plan.test.corrections.entries()) {
    const found = outcome.corrections[i]!.edges;
    const edges = found.map((edge) => resultEdgeOf(edge, axes)).sort(byClaim);
    const name = i === 0 ? 'edges' : `edges-${id}`;
    await writeText(folder, `${name}.tsv`, edgesTsv(edges, axes, origin.plan.measure));
    await writeJson(folder, `${name}.json`, edgesSidecar(origin, id, edges.length));
  }
  const { clusters } = outcome;
  await writeText(folder, 'clusters.tsv', clustersTsv(clusters, axes));
  await writeJson(folder, 'clusters.json', clustersSidecar(origin, clusters.length));
}

function describedRecording({ facts, path: file, blanked, sidecars, notices }: MatchedRecording) {
  return {
    sha256: facts.sha256,
    file: path.basename(file),
    matched: blanked ? 'with its identifying fields blanked' : 'as it is',
    sidecars,
    notices,
  };
}

function countsOf({ plan }: GivenPlan, recordings: MatchedRecording[], run: WholeRun) {
  const { axes, outcome, summary } = run;
  const facts = recordings.map((recording) => recording.facts);
  const { epochs, lost } = planEpochs(plan, facts);
  const inCondition = (list: Pick<LostEpoch, 'condition'>[], condition: 'a' | 'b') =>
    list.filter((epoch) => epoch.condition === condition).length;
  const sizes = [axes.pairs.length, axes.frequenciesHz.length, axes.timesS.length];
  return {
    plannedA: inCondition(epochs, 'a') + inCondition(lost, 'a'),
    plannedB: inCondition(epochs, 'b') + inCondition(lost, 'b'),
    keptA: summary.keptA,
    keptB: summary.keptB,
    pairs: sizes[0],
    frequencies: sizes[1],
    times: sizes[2],
    tests: sizes.reduce((product, size) => product * size, 1),
    permutations: plan.test.permutations,
    clusters: outcome.clusters.length,
    degenerateFeatures: outcome.degenerateFeatures,
  };
}

function writeText(folder: string, name: string, text: string): Promise<void> {
  return writeFile(path.join(folder, name), text, { flag: 'wx' });
}

function writeJson(folder: string, name: string, value: unknown): Promise<void> {
  return writeText(folder, name, `${JSON.stringify(value, null, 2)}\n`);
}
