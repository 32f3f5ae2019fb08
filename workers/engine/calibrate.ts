import type { RunCounts } from './digest';
import { drawPermutations, drawsByteLength } from './null/draws';
import { computePairs } from './pairs';
import { layoutOf, phaseJob, phasesOfEpoch } from './phase/phases';
import type { Plan } from './plan';
import type { Axes } from './types';

const firstPermutations = 64;
/** Compilers need several goes before they give a loop its final speed; a form can wait this long. */
const wantedS = 0.4;
const fewestGoes = 3;
const mostGoes = 60;
/** The sample's memory stays small; cost is linear in epochs beyond. */
const mostEpochs = 400;

/**
 * Seconds that one pair under all permutations, and one epoch's phases, cost on this machine and
 * one worker, measured on a small sample of the plan's sizes; reading the file is not in it.
 */
export function calibrate(
  plan: Plan,
  axes: Axes,
  counts: RunCounts,
): { secondsPerPair: number; secondsPerEpoch: number } {
  return {
    secondsPerPair: secondsPerPair(plan, axes, counts),
    secondsPerEpoch: secondsPerEpoch(plan, axes),
  };
}

function secondsPerPair(plan: Plan, axes: Axes, counts: RunCounts): number {
  const sample = {
    epochsA: Math.max(2, Math.min(mostEpochs, counts.epochsA)),
    epochsB: Math.max(2, Math.min(mostEpochs, counts.epochsB)),
    blocks: [] as number[],
  };
  // One block is as dear as many.
  sample.blocks = new Array<number>(sample.epochsA + sample.epochsB).fill(0);
  const share = (counts.epochsA + counts.epochsB) / (sample.epochsA + sample.epochsB);
  const pair: Axes = { ...axes, sites: axes.sites.slice(0, 2), pairs: [[0, 1]] };
  const { byteLength } = layoutOf(plan, pair, sample.epochsA + sample.epochsB);
  const buffer = somePhasors(byteLength / Float32Array.BYTES_PER_ELEMENT);
  const time = (permutations: number) => {
    const short = { ...plan, test: { ...plan.test, permutations } };
    const draws = new ArrayBuffer(drawsByteLength(short, pair, sample));
    drawPermutations(short, pair, sample, { from: 0, to: permutations }, draws);
    return seconds(() =>
      computePairs(short, pair, { from: 0, to: 1 }, { buffer, ...sample }, { buffer: draws }),
    );
  };
  const { permutations } = plan.test;
  let count = Math.min(permutations, firstPermutations);
  const each = fastest(() => {
    const cost = time(count) / count;
    count = Math.min(permutations, 2 * count);
    return cost;
  });
  return Math.max(1, share) * each * permutations;
}

function secondsPerEpoch(plan: Plan, axes: Axes): number {
  const siteCount = Math.min(axes.sites.length, 4);
  const some: Axes = { ...axes, sites: axes.sites.slice(0, siteCount) };
  const job = phaseJob(plan, some, 1);
  const samples = some.sites.map((_, site) =>
    Float64Array.from({ length: job.first.length }, (__, i) => noiseAt(i * siteCount + site)),
  );
  const phasors = new Float32Array(job.layout.byteLength / Float32Array.BYTES_PER_ELEMENT);
  const run = () => phasesOfEpoch(job, samples, 0, phasors, 'a sample');
  return (fastest(() => seconds(run)) * axes.sites.length) / siteCount;
}

/** The least of what some goes at a task cost: the rest is the compiler and other programs. */
function fastest(cost: () => number): number {
  const start = performance.now();
  let least = Infinity;
  for (let go = 0; go < mostGoes; go++) {
    least = Math.min(least, cost());
    if (go >= fewestGoes && performance.now() - start > 1000 * wantedS) break;
  }
  return least;
}

/** Unit phasors of no particular phase: cost does not depend on them. */
function somePhasors(length: number): ArrayBuffer {
  return Float32Array.from({ length }, (_, i) => (noiseAt(i) > 0 ? 0.6 : 0.8)).buffer;
}

function noiseAt(i: number): number {
  return Math.sin(12.9898 * i + 78.233 * ((i * i) % 101));
}

function seconds(run: () => void): number {
  const start = performance.now();
  run();
  return (performance.now() - start) / 1000;
}
