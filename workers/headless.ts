import {
  axesOf,
  computePairs,
  conclude,
  drawPermutations,
  drawsByteLength,
  engineVersion,
  layoutOf,
  mergeBlocks,
  phaseBytes,
  planEpochs,
  planHash,
  screenEpochs,
  withoutLost,
  writePhases,
  type Axes,
  type Epoch,
  type LostEpoch,
  type Outcome,
  type PairBlock,
  type Plan,
  type RecordingSource,
  type RunMaps,
} from './engine';

/**
 * A whole run without a browser: the same stages of the same engine as the worker pool takes, one
 * after the other in this thread, so the digest is the same too.
 */

export interface HeadlessOptions {
  /** Pairs in a block; the outcome does not depend on it. */
  pairsPerBlock?: number;
  onProgress?: (pairsDone: number, pairCount: number) => void;
}

export interface HeadlessResult {
  axes: Axes;
  maps: RunMaps;
  outcome: Outcome;
  /** Phase angles of the kept epochs, [site][epoch][frequency][time], 256 to the turn. */
  phases: Uint8Array;
  /** What the server is told besides the maps. */
  summary: {
    planHash: string;
    engineVersion: string;
    digest: string;
    workerCount: number;
    keptA: number;
    keptB: number;
    lost: LostEpoch[];
    maxStatistic: number[];
    clusterMass: number[];
    timings: Timings;
  };
}

/** Seconds that each stage took. */
interface Timings {
  fetchS: number;
  screenS: number;
  phasesS: number;
  pairsS: number;
  concludeS: number;
}

/**
 * Runs a plan over its recordings.
 * @throws PlanError when the plan does not fit them; RangeError or EdfError naming what is wrong
 */
export async function runHeadless(
  plan: Plan,
  recordings: RecordingSource[],
  options: HeadlessOptions = {},
): Promise<HeadlessResult> {
  const facts = recordings.map((recording) => recording.facts);
  const axes = axesOf(plan, facts);
  const timings: Timings = { fetchS: 0, screenS: 0, phasesS: 0, pairsS: 0, concludeS: 0 };
  const timed = stopwatch(timings);

  const { kept, lost } = await timed('screenS', () => keptEpochs(plan, axes, recordings));
  const epochsA = kept.filter((epoch) => epoch.condition === 'a').length;
  const counts = { epochsA, epochsB: kept.length - epochsA };
  const buffer = new ArrayBuffer(layoutOf(plan, axes, kept.length).byteLength);
  const phases = { ...counts, buffer };
  await timed('phasesS', () =>
    writePhases(plan, axes, recordings, kept, { from: 0, to: kept.length }, buffer),
  );
  const maps = await timed('pairsS', () => allPairs(plan, axes, phases, options));
  const outcome = await timed('concludeS', () => conclude(plan, axes, counts, maps));
  return {
    axes,
    maps,
    outcome,
    phases: phaseBytes(plan, axes, phases),
    summary: {
      planHash: await planHash(plan),
      engineVersion,
      digest: outcome.digest,
      workerCount: 1,
      keptA: counts.epochsA,
      keptB: counts.epochsB,
      lost,
      maxStatistic: Array.from(maps.maxStatistic),
      clusterMass: Array.from(maps.maxClusterMass),
      timings,
    },
  };
}

async function keptEpochs(
  plan: Plan,
  axes: Axes,
  recordings: RecordingSource[],
): Promise<{ kept: Epoch[]; lost: LostEpoch[] }> {
  const facts = recordings.map((recording) => recording.facts);
  const { epochs, lost } = planEpochs(plan, facts);
  const screened = await screenEpochs(plan, axes, recordings, epochs);
  return { kept: withoutLost(epochs, screened), lost: [...lost, ...screened] };
}

function allPairs(
  plan: Plan,
  axes: Axes,
  phases: { epochsA: number; epochsB: number; buffer: ArrayBuffer },
  { pairsPerBlock = 16, onProgress }: HeadlessOptions,
): RunMaps {
  const { permutations } = plan.test;
  const draws = { buffer: new ArrayBuffer(drawsByteLength(plan, axes, phases)) };
  drawPermutations(plan, axes, phases, { from: 0, to: permutations }, draws.buffer);
  const pairCount = axes.pairs.length;
  const blocks: PairBlock[] = [];
  for (let from = 0; from < pairCount; from += pairsPerBlock) {
    const to = Math.min(pairCount, from + pairsPerBlock);
    blocks.push(computePairs(plan, axes, { from, to }, phases, draws));
    onProgress?.(to, pairCount);
  }
  return mergeBlocks(blocks, axes, permutations);
}

function stopwatch(timings: Timings) {
  return async <T>(stage: keyof Timings, work: () => T | Promise<T>): Promise<T> => {
    const begun = performance.now();
    const result = await work();
    timings[stage] = (performance.now() - begun) / 1000;
    return result;
  };
}
