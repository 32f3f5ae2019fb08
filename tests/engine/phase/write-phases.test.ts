import { beforeAll, describe, expect, test } from 'vitest';
import {
  axesOf,
  layoutOf,
  phaseBytes,
  planEpochs,
  writePhases,
  type Axes,
  type Epoch,
  type RecordingSource,
} from '../../../workers/engine';
import { simulatedPlan, simulatedRecording } from '../worker/simulated';

const plan = simulatedPlan();
let recording: RecordingSource;
let axes: Axes;
let epochs: Epoch[];

beforeAll(async () => {
  recording = await simulatedRecording();
  axes = axesOf(plan, [recording.facts]);
  epochs = planEpochs(plan, [recording.facts]).epochs;
});

function write(from: number, to: number, buffer: ArrayBuffer): Promise<void> {
  return writePhases(plan, axes, [recording], epochs, { from, to }, buffer);
}

describe('writePhases', () => {
  test('writes unit phasors of its range of epochs, and touches nothing else', async () => {
    const layout = layoutOf(plan, axes, epochs.length);
    const phasors = new Float32Array(layout.byteLength / 4).fill(7);
    await write(5, 9, phasors.buffer);
    const { epochCount, samplesPerEpoch } = layout;
    for (let site = 0; site < 3; site++) {
      for (let epoch = 0; epoch < epochCount; epoch++) {
        const at = (site * epochCount + epoch) * 2 * samplesPerEpoch;
        for (let i = at; i < at + samplesPerEpoch; i++) {
          const size = Math.hypot(phasors[i], phasors[i + samplesPerEpoch]);
          if (epoch >= 5 && epoch < 9) expect(size).toBeCloseTo(1, 6);
          else expect([phasors[i], phasors[i + samplesPerEpoch]]).toEqual([7, 7]);
        }
      }
    }
  });

  test('refuses a range beyond the kept epochs, and a buffer of another plan', async () => {
    const { byteLength } = layoutOf(plan, axes, epochs.length);
    await expect(write(0, epochs.length + 1, new ArrayBuffer(byteLength))).rejects.toThrow(
      `range 0 to ${epochs.length + 1} leaves the ${epochs.length} kept epochs`,
    );
    await expect(write(0, 1, new ArrayBuffer(byteLength - 4))).rejects.toThrow(
      `where the plan needs ${byteLength}`,
    );
  });
});

describe('phaseBytes', () => {
  test('keeps each phase to the nearest of 256 steps of a turn', () => {
    const { byteLength, samplesPerEpoch } = layoutOf(plan, axes, 8);
    const phasors = new Float32Array(byteLength / 4).fill(1, 0);
    const steps = [0, 0.4, 0.6, 63.7, 127.6, -0.4, -0.6, -127.4];
    steps.forEach((step, i) => {
      phasors[i] = Math.cos((2 * Math.PI * step) / 256);
      phasors[i + samplesPerEpoch] = Math.sin((2 * Math.PI * step) / 256);
    });
    const bytes = phaseBytes(plan, axes, { buffer: phasors.buffer, epochsA: 4, epochsB: 4 });
    expect([...bytes.subarray(0, steps.length)]).toEqual([0, 0, 1, 64, 128, 0, 255, 129]);
  });

  test('refuses a buffer of another plan', () => {
    const phases = { buffer: new ArrayBuffer(8), epochsA: 4, epochsB: 4 };
    expect(() => phaseBytes(plan, axes, phases)).toThrow('a buffer of 8 bytes where the plan');
  });
});
