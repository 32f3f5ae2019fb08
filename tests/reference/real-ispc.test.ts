import { beforeAll, describe, expect, test } from 'vitest';
import type { Plan } from '../../workers/engine/plan';
import { axesOf } from '../../workers/engine/prepare/axes';
import { planEpochs } from '../../workers/engine/prepare/plan-epochs';
import { epochReader, type RecordingSource } from '../../workers/engine/prepare/read-epoch';
import { phaseJob, phasesOfEpoch } from '../../workers/engine/phase/phases';
import type { PhaseLayout } from '../../workers/engine/phase/layout';
import type { Axes, Epoch } from '../../workers/engine/types';
import {
  expectedSets,
  eyesPlan,
  fistsPlan,
  realRecording,
  skipReason,
  type ExpectedSet,
} from './real-recordings';

// Outside values: expected.json, an independent NumPy reading of the same definitions, printed to
// five decimals (rounding 5e-6); phasors are stored in f32 (6e-8 each). COMP.
const tolerance = 1e-4;

if (skipReason) console.warn(skipReason);

interface Prepared {
  axes: Axes;
  epochs: Epoch[];
  layout: PhaseLayout;
  phasors: Float32Array;
}

/** The path of a run: facts, epochs, samples, phases. */
async function prepare(plan: Plan, recordings: RecordingSource[]): Promise<Prepared> {
  const facts = recordings.map((recording) => recording.facts);
  const axes = axesOf(plan, facts);
  const { epochs } = planEpochs(plan, facts);
  const reader = epochReader(plan, axes, recordings);
  const job = phaseJob(plan, axes, epochs.length);
  const phasors = new Float32Array(job.layout.byteLength / 4);
  for (const [i, epoch] of epochs.entries()) {
    phasesOfEpoch(job, await reader.read(epoch), i, phasors, reader.describe(epoch));
  }
  return { axes, epochs, layout: job.layout, phasors };
}

/** ISPC over trials by its definition, over the epochs of one condition; [pair][f][t]. */
function ispcOf({ axes, epochs, layout, phasors }: Prepared, condition: 'a' | 'b'): number[][][] {
  const { epochCount, samplesPerEpoch } = layout;
  const chosen = epochs.flatMap((epoch, i) => (epoch.condition === condition ? [i] : []));
  const value = (site: number, epoch: number, at: number) => {
    const real = (site * epochCount + epoch) * 2 * samplesPerEpoch + at;
    return [phasors[real], phasors[real + samplesPerEpoch]];
  };
  return axes.pairs.map(([j, k]) =>
    axes.frequenciesHz.map((_, f) =>
      axes.timesS.map((__, t) => {
        let re = 0;
        let im = 0;
        for (const epoch of chosen) {
          const [a, b] = value(j, epoch, f * axes.timesS.length + t);
          const [c, d] = value(k, epoch, f * axes.timesS.length + t);
          re += a * c + b * d;
          im += b * c - a * d;
        }
        return Math.hypot(re, im) / chosen.length;
      }),
    ),
  );
}

function largestDifference(found: number[][][], expected: number[][][]): number {
  const [x, y] = [found.flat(2), expected.flat(2)];
  expect(x.length).toBe(y.length);
  return Math.max(...x.map((value, i) => Math.abs(value - y[i])));
}

function check(expected: () => ExpectedSet, prepared: () => Prepared): void {
  test('epoch counts are equal', () => {
    const { epochs } = prepared();
    const inA = epochs.filter((epoch) => epoch.condition === 'a').length;
    expect({ A: inA, B: epochs.length - inA }).toEqual(expected().epochs);
  });

  test('ISPC is equal to 1e-4 in every cell of A and B', () => {
    expect(largestDifference(ispcOf(prepared(), 'a'), expected().ispcA)).toBeLessThan(tolerance);
    expect(largestDifference(ispcOf(prepared(), 'b'), expected().ispcB)).toBeLessThan(tolerance);
  });
}

describe.skipIf(skipReason !== null)('eyes closed against eyes open', () => {
  let expected: ExpectedSet;
  let prepared: Prepared;

  beforeAll(async () => {
    expected = expectedSets().eyes;
    const closed = await realRecording('eyes-closed.edf');
    const open = await realRecording('eyes-open.edf');
    const plan = eyesPlan(expected, closed.facts.sha256, open.facts.sha256);
    prepared = await prepare(plan, [closed, open]);
  });

  check(
    () => expected,
    () => prepared,
  );
});

describe.skipIf(skipReason !== null)('right fist against left fist', () => {
  let expected: ExpectedSet;
  let prepared: Prepared;

  beforeAll(async () => {
    expected = expectedSets().fists;
    const recording = await realRecording('fists.edf');
    prepared = await prepare(fistsPlan(expected, recording.facts.sha256), [recording]);
  });

  check(
    () => expected,
    () => prepared,
  );
});
