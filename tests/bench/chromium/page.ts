import * as Comlink from 'comlink';
import type { EngineWorkerApi } from '../../../workers/protocol';
import { simulatedRun } from '../simulated-run';

export interface WholeRun {
  seconds: number;
  /** Longest time that the page could not answer. */
  longestMs: number;
  pairs: number;
}

const sizes = {
  sites: 64,
  epochsA: 100,
  epochsB: 100,
  frequencies: 20,
  times: 50,
  permutations: 1000,
};
const pairsPerBlock = 32;

/** All that comes before: phases, draws, workers with the engine loaded and compiled. */
async function prepare() {
  const { plan, axes, phases, draws } = simulatedRun(sizes);
  const workers = [0, 1].map(() => {
    const address = new URL('../../../workers/engine-worker.ts', import.meta.url);
    return Comlink.wrap<EngineWorkerApi>(new Worker(address, { type: 'module' }));
  });
  const onPair = Comlink.proxy(() => undefined);
  const block = (worker: (typeof workers)[number], from: number) => {
    const range = { from, to: Math.min(axes.pairs.length, from + pairsPerBlock) };
    return worker.pairs(plan, axes, range, phases, draws, onPair);
  };
  // A first block each loads the engine and compiles it, as the steps before it do in a run.
  await Promise.all(workers.map((worker) => block(worker, 0)));

  return { workers, block, pairCount: axes.pairs.length };
}

let prepared: Awaited<ReturnType<typeof prepare>>;

/** Runs all pairs on two workers, as the run page does, and watches the page meanwhile. */
async function wholeRun(): Promise<WholeRun> {
  const { workers, block, pairCount: pairs } = prepared;
  const watch = watchPage();
  const start = performance.now();
  let done = 0;
  let next = 0;
  const work = async (worker: (typeof workers)[number]) => {
    while (next < pairs) {
      const from = next;
      next += pairsPerBlock;
      const { pairCount } = await block(worker, from);
      done += pairCount;
    }
  };
  await Promise.all(workers.map(work));
  const seconds = (performance.now() - start) / 1000;
  return { seconds, longestMs: watch(), pairs: done };
}

/** Ticks every few milliseconds; the returned function stops it and tells the longest gap. */
function watchPage(): () => number {
  let last = performance.now();
  let longest = 0;
  const timer = setInterval(() => {
    const now = performance.now();
    longest = Math.max(longest, now - last);
    last = now;
  }, 4);
  return () => {
    clearInterval(timer);
    return longest;
  };
}

Object.assign(window, {
  wholeRun,
  prepare: async () => {
    prepared = await prepare();
  },
});
