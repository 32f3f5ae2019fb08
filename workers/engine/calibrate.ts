import type { RunCounts } from './digest';
import { drawPermutations, drawsByteLength } from './null/draws';
import { computePairs } from './pairs';
import { layoutOf, phaseJob, phasesOfEpoch } from './phase/phases';
import type { Plan } from './plan';
import type { Axes } from './types';

const firstPermutations = 64;
/** Long enough for the compiler and the clock, short enough for a form. */
const wantedS = 0.08;
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
  };
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
  const first = Math.min(plan.test.permutations, firstPermutations);
  time(first);
  const warm = time(first);
  const most = Math.ceil((first * wantedS) / Math.max(warm, 1e-4));
  const permutations = Math.min(plan.test.permutations, Math.max(first, most));
  return (Math.max(1, share) * time(permutations) * plan.test.permutations) / permutations;
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
  for (let i = 0; i < 3; i++) run();
  const repeats = Math.max(1, Math.min(50, Math.floor(wantedS / Math.max(seconds(run), 1e-4))));
  const all = seconds(() => {
    for (let i = 0; i < repeats; i++) run();
  });
  return (all / repeats) * (axes.sites.length / siteCount);
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
