import { computePairs } from '../../workers/engine';
import { simulatedRun, type RunSizes } from './simulated-run';

const base: RunSizes = {
  sites: 4,
  epochsA: 60,
  epochsB: 60,
  frequencies: 10,
  times: 20,
  permutations: 1000,
};
const repeats = 9;

/** Least milliseconds of processor time of one go, and megabytes of arrays and kernels' memory above an empty run. */
function cost(sizes: RunSizes, pairs: number): { ms: number; megabytes: number } {
  const { plan, axes, phases, draws } = simulatedRun(sizes);
  let least = Infinity;
  for (let i = 0; i < repeats; i++) {
    const before = process.cpuUsage();
    computePairs(plan, axes, { from: 0, to: pairs }, phases, draws);
    const { user, system } = process.cpuUsage(before);
    least = Math.min(least, (user + system) / 1000);
  }
  return { ms: least, megabytes: process.memoryUsage().rss / 1e6 };
}

/**
 * How the cost of pairs grows when one size is doubled and doubled again: the milliseconds over the
 * growth should stay the same. Memory is the process's, so it can only grow; beyond one tile of
 * null maps (64 MB) it does not grow with permutations.
 */
export function scale(): void {
  const line = (cells: (string | number)[]) => console.log(`| ${cells.join(' | ')} |`);
  line(['grows', 'times', 'CPU ms', 'over growth', 'MB in all']);
  line(['---', '---', '---', '---', '---']);
  const show = (name: string, growth: number, sizes: RunSizes, pairs: number) => {
    const { ms, megabytes } = cost(sizes, pairs);
    line([name, growth, ms.toFixed(1), (ms / growth).toFixed(1), megabytes.toFixed(0)]);
  };
  for (const growth of [1, 2, 4]) show('pairs', growth, { ...base, sites: 8 }, 4 * growth);
  for (const growth of [1, 2, 4]) show('points', growth, { ...base, times: 20 * growth }, 4);
  for (const growth of [1, 2, 4, 8, 64]) {
    show('permutations', growth, { ...base, permutations: 1000 * growth }, 2);
  }
}
