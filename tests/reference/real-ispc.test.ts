import { beforeAll, describe, expect, test } from 'vitest';
import {
  axesOf,
  computePairs,
  drawPermutations,
  drawsByteLength,
  layoutOf,
  planEpochs,
  writePhases,
  type Plan,
  type PairBlock,
  type RecordingSource,
  type RunCounts,
} from '../../workers/engine';
import {
  expectedSets,
  eyesPlan,
  fistsPlan,
  realRecording,
  skipReason,
  type ExpectedSet,
} from './real-recordings';

// Outside values: expected.json, an independent NumPy reading of the same definitions. COMP.

// Printed to five decimals (rounding 5e-6); phasors are stored in f32 (6e-8 each).
const ispcTolerance = 1e-4;

if (skipReason) console.warn(skipReason);

interface Run {
  counts: RunCounts;
  block: PairBlock;
}

/** The path of a run: facts, epochs, samples, phases, draws, pairs. */
async function run(plan: Plan, recordings: RecordingSource[]): Promise<Run> {
  const facts = recordings.map((recording) => recording.facts);
  const axes = axesOf(plan, facts);
  const { epochs } = planEpochs(plan, facts);
  const epochsA = epochs.filter((epoch) => epoch.condition === 'a').length;
  const counts = { epochsA, epochsB: epochs.length - epochsA };
  const phases = new ArrayBuffer(layoutOf(plan, axes, epochs.length).byteLength);
  await writePhases(plan, axes, recordings, epochs, { from: 0, to: epochs.length }, phases);
  const draws = new ArrayBuffer(drawsByteLength(plan, axes, counts));
  drawPermutations(plan, axes, counts, { from: 0, to: plan.test.permutations }, draws);
  const block = computePairs(
    plan,
    axes,
    { from: 0, to: axes.pairs.length },
    { buffer: phases, ...counts },
    { buffer: draws },
  );
  return { counts, block };
}

function largestDifference(found: Float32Array, expected: number[][][]): number {
  const cells = expected.flat(2);
  expect(found.length).toBe(cells.length);
  return Math.max(...cells.map((value, i) => Math.abs(value - found[i])));
}

function check(expected: () => ExpectedSet, found: () => Run): void {
  test('epoch counts are equal', () => {
    const { epochsA, epochsB } = found().counts;
    expect({ A: epochsA, B: epochsB }).toEqual(expected().epochs);
  });

  test('ISPC is equal to 1e-4 in every cell of A and B', () => {
    const { observedA, observedB } = found().block;
    expect(largestDifference(observedA, expected().ispcA)).toBeLessThan(ispcTolerance);
    expect(largestDifference(observedB, expected().ispcB)).toBeLessThan(ispcTolerance);
  });
}

describe.skipIf(skipReason !== null)('eyes closed against eyes open', () => {
  let expected: ExpectedSet;
  let found: Run;

  beforeAll(async () => {
    expected = expectedSets().eyes;
    const closed = await realRecording('eyes-closed.edf');
    const open = await realRecording('eyes-open.edf');
    const plan = eyesPlan(expected, closed.facts.sha256, open.facts.sha256);
    found = await run(plan, [closed, open]);
  });

  check(
    () => expected,
    () => found,
  );

  test('z is equal within the Monte Carlo error of both sides in every cell', () => {
    const permutations = 4000;
    const cells = expected.z_at_4000_permutations!.flat();
    expect(found.block.z.length).toBe(cells.length);
    // var z = 1/P from the mean and z^2 / 2P from the sd, for a near-normal null, on each side;
    // five standard errors over 980 cells are passed by chance in fewer than 1 of 1000 seeds.
    // Half a hundredth more for z printed to two decimals.
    const inErrors = cells.map((z, i) => {
      const error = Math.sqrt((2 * (1 + (z * z) / 2)) / permutations);
      return Math.max(0, Math.abs(found.block.z[i] - z) - 0.005) / error;
    });
    expect(Math.max(...inErrors)).toBeLessThan(5);
    // And no drift of all z one way: the mean over cells is far better known than any of them.
    const drift = cells.reduce((sum, z, i) => sum + found.block.z[i] - z, 0) / cells.length;
    expect(Math.abs(drift)).toBeLessThan(0.02);
  });
});

describe.skipIf(skipReason !== null)('right fist against left fist', () => {
  let expected: ExpectedSet;
  let found: Run;

  beforeAll(async () => {
    expected = expectedSets().fists;
    const recording = await realRecording('fists.edf');
    found = await run(fistsPlan(expected, recording.facts.sha256), [recording]);
  });

  check(
    () => expected,
    () => found,
  );
});
