import { proxy } from 'comlink';
import { drawsByteLength, epochBlocks, layoutOf } from '../engine';
import type { Axes, Epoch, LostEpoch, PairBlock, Plan } from '../engine';
import type { KnownRecording, RecordingInput, SharedDraws, SharedPhases } from '../protocol';
import type { TaskPool } from './pool';
import { partSize, splitRange, type Range } from './split';

/** The steps of a run, each spread over the pool. No step knows the page or the server. */

export interface StepContext<Recording extends KnownRecording = RecordingInput> {
  pool: TaskPool<Recording>;
  plan: Plan;
  axes: Axes;
  recordings: Recording[];
  /** What a worker does just now, for its line on the page. */
  onWorker: (worker: number, doing: string) => void;
}

/** Epochs whose samples break a limit of the plan. */
export async function screen<Recording extends KnownRecording>(
  context: StepContext<Recording>,
  epochs: Epoch[],
): Promise<LostEpoch[]> {
  const { pool, plan, recordings, onWorker } = context;
  const size = partSize(epochs.length, pool.size, 4, 200);
  const parts = splitRange({ from: 0, to: epochs.length }, size);
  const lost = await Promise.all(
    parts.map(({ from, to }) =>
      pool.run((api, worker) => {
        onWorker(worker, `reading epochs ${from + 1} to ${to}`);
        return api.screen(plan, recordings, epochs.slice(from, to));
      }),
    ),
  );
  return lost.flat();
}

/** Unit phasors of the kept epochs in memory that all workers share. */
export async function phases<Recording extends KnownRecording>(
  context: StepContext<Recording>,
  kept: Epoch[],
  onDone: (epochs: number) => void,
): Promise<SharedPhases> {
  const { pool, plan, axes, recordings, onWorker } = context;
  const { byteLength } = layoutOf(plan, axes, kept.length);
  const epochsA = kept.filter((epoch) => epoch.condition === 'a').length;
  const shared: SharedPhases = {
    buffer: new SharedArrayBuffer(byteLength),
    epochsA,
    epochsB: kept.length - epochsA,
    blocks: epochBlocks(plan, kept),
  };
  const size = partSize(kept.length, pool.size, 4, 100);
  await Promise.all(
    splitRange({ from: 0, to: kept.length }, size).map((range) =>
      pool.run(async (api, worker) => {
        onWorker(worker, `phases of epochs ${range.from + 1} to ${range.to}`);
        await api.phases(plan, recordings, kept, range, shared);
        onDone(range.to - range.from);
      }),
    ),
  );
  return shared;
}

/** What each permutation shuffles. */
export async function draws<Recording extends KnownRecording>(
  { pool, plan, axes, onWorker }: StepContext<Recording>,
  { epochsA, epochsB, blocks }: SharedPhases,
): Promise<SharedDraws> {
  const counts = { epochsA, epochsB, blocks, axes };
  const shared = { buffer: new SharedArrayBuffer(drawsByteLength(plan, axes, counts)) };
  const { permutations } = plan.test;
  const size = partSize(permutations, pool.size, 2, 5000);
  await Promise.all(
    splitRange({ from: 0, to: permutations }, size).map((range) =>
      pool.run((api, worker) => {
        onWorker(worker, `drawing permutations ${range.from + 1} to ${range.to}`);
        return api.draws(plan, counts, range, shared);
      }),
    ),
  );
  return shared;
}

/** Larger blocks would only make the checkpoints coarser. */
const mostPairsInBlock = 32;

/**
 * Every permutation of the pairs in `ranges`, in blocks: a feature's z needs the mean and sd over
 * all of its surrogates, so a block of pairs carries all permutations.
 */
export async function pairBlocks<Recording extends KnownRecording>(
  context: StepContext<Recording>,
  ranges: Range[],
  shared: { phases: SharedPhases; draws: SharedDraws },
  on: {
    pair: (block: Range, pairsDone: number, worker: number) => void;
    block: (block: PairBlock, worker: number) => void;
  },
  pairsInBlock?: number,
): Promise<void> {
  const { pool, plan, axes, onWorker } = context;
  const left = ranges.reduce((sum, { from, to }) => sum + to - from, 0);
  const size = pairsInBlock ?? partSize(left, pool.size, 8, mostPairsInBlock);
  const blocks = ranges.flatMap((range) => splitRange(range, size));
  await Promise.all(
    blocks.map((range) =>
      pool.run(async (api, worker) => {
        onWorker(worker, `pairs ${range.from + 1} to ${range.to}`);
        on.pair(range, 0, worker);
        const onPair = proxy((done: number): void => on.pair(range, done, worker));
        const { phases, draws } = shared;
        on.block(await api.pairs(plan, axes, range, phases, draws, onPair), worker);
      }),
    ),
  );
}
