import { transfer } from 'comlink';
import {
  axesOf,
  BlockGatherer,
  engineVersion,
  partLists,
  planEpochs,
  planHash,
  withoutLost,
  type Axes,
  type Epoch,
  type GatheredBlocks,
  type LostEpoch,
  type Outcome,
  type Plan,
  type RunMaps,
} from '../engine';
import type { KnownRecording, SharedPhases } from '../protocol';
import { buffersOf } from './buffers';
import type { TaskPool } from './pool';
import { draws, pairBlocks, phases, screen, type StepContext } from './steps';

/** Seconds that each stage took. */
export interface Timings {
  fetchS: number;
  screenS: number;
  phasesS: number;
  pairsS: number;
  concludeS: number;
}

export interface WholeRun {
  axes: Axes;
  maps: RunMaps;
  outcome: Outcome;
  /** Unit phasors of the kept epochs. */
  phases: SharedPhases;
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
    parts: Record<string, number[]>;
    timings: Timings;
  };
}

export type RunStage = 'screening' | 'phases' | 'pairs' | 'concluding';

export interface WholeRunOptions {
  /** Pairs in a block; the outcome does not depend on it. */
  pairsPerBlock?: number;
  /** Epochs of phases, or pairs, done in a stage; 0 of 0 where a stage counts nothing. */
  onProgress?: (stage: RunStage, done: number, of: number) => void;
}

/** Too few epochs are left of a condition for anything to be said. */
export class TooFewEpochsError extends RangeError {
  override readonly name = 'TooFewEpochsError';
}

/**
 * Runs a plan over its recordings on a pool, stage after stage. The outcome does not depend on the
 * pool's size nor on the order in which its parts are done.
 * @throws PlanError when the plan does not fit the recordings; TooFewEpochsError; whatever the
 * engine throws, naming what is wrong; PoolError when the pool ends
 */
export async function wholeRun<Recording extends KnownRecording>(
  pool: TaskPool<Recording>,
  plan: Plan,
  recordings: Recording[],
  options: WholeRunOptions = {},
): Promise<WholeRun> {
  const onProgress = options.onProgress ?? (() => undefined);
  const facts = recordings.map((recording) => recording.facts);
  const axes = axesOf(plan, facts);
  const context = { pool, plan, axes, recordings, onWorker: () => undefined };
  const timings: Timings = { fetchS: 0, screenS: 0, phasesS: 0, pairsS: 0, concludeS: 0 };
  const timed = stopwatch(timings);

  onProgress('screening', 0, 0);
  const { kept, lost } = await timed('screenS', () => keptEpochs(context));
  let epochsDone = 0;
  onProgress('phases', 0, kept.length);
  const shared = await timed('phasesS', () =>
    phases(context, kept, (count) => onProgress('phases', (epochsDone += count), kept.length)),
  );
  const gathered = await timed('pairsS', () => allPairs(context, shared, options));
  onProgress('concluding', 0, 0);
  const counts = { epochsA: shared.epochsA, epochsB: shared.epochsB };
  const { maps, outcome } = await timed('concludeS', () =>
    pool.run((api) =>
      api.conclude(plan, axes, counts, transfer(gathered, buffersOf(gathered.maps))),
    ),
  );
  return {
    axes,
    maps,
    outcome,
    phases: shared,
    summary: {
      planHash: await planHash(plan),
      engineVersion,
      digest: outcome.digest,
      workerCount: pool.size,
      keptA: counts.epochsA,
      keptB: counts.epochsB,
      lost,
      maxStatistic: Array.from(maps.maxStatistic),
      clusterMass: Array.from(maps.maxClusterMass),
      parts: partLists(maps),
      timings,
    },
  };
}

async function keptEpochs<Recording extends KnownRecording>(
  context: StepContext<Recording>,
): Promise<{ kept: Epoch[]; lost: LostEpoch[] }> {
  const facts = context.recordings.map((recording) => recording.facts);
  const { epochs, lost } = planEpochs(context.plan, facts);
  const screened = await screen(context, epochs);
  const kept = withoutLost(epochs, screened);
  for (const condition of ['a', 'b'] as const) {
    const left = kept.filter((epoch) => epoch.condition === condition).length;
    if (left >= 2) continue;
    throw new TooFewEpochsError(
      `Condition ${condition.toUpperCase()} has ${left} epochs left; two are the least. Loosen the limits or widen the rules.`,
    );
  }
  return { kept, lost: [...lost, ...screened] };
}

async function allPairs<Recording extends KnownRecording>(
  context: StepContext<Recording>,
  shared: SharedPhases,
  { pairsPerBlock, onProgress }: WholeRunOptions,
): Promise<GatheredBlocks> {
  const pairCount = context.axes.pairs.length;
  onProgress?.('pairs', 0, pairCount);
  const drawn = await draws(context, shared);
  const gatherer = new BlockGatherer(context.axes, context.plan.test);
  const doneOf = new Map<number, number>();
  let total = 0;
  // Words of a worker can arrive after its answer, and a broken worker's part begins anew.
  const count = (firstPair: number, done: number): void => {
    const more = done - (doneOf.get(firstPair) ?? 0);
    if (more <= 0) return;
    doneOf.set(firstPair, done);
    total += more;
    onProgress?.('pairs', total, pairCount);
  };
  await pairBlocks(
    context,
    [{ from: 0, to: pairCount }],
    { phases: shared, draws: drawn },
    {
      pair: (range, done) => count(range.from, done),
      block: (block) => {
        gatherer.add(block);
        count(block.firstPair, block.pairCount);
      },
    },
    pairsPerBlock,
  );
  return gatherer.finish();
}

function stopwatch(timings: Timings) {
  return async <T>(stage: keyof Timings, work: () => Promise<T>): Promise<T> => {
    const begun = performance.now();
    const result = await work();
    timings[stage] = (performance.now() - begun) / 1000;
    return result;
  };
}
