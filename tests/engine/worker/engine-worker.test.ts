import * as Comlink from 'comlink';
import { afterAll, beforeAll, describe, expect, test, vi } from 'vitest';
import {
  axesOf,
  BlockGatherer,
  drawsByteLength,
  layoutOf,
  planEpochs,
  type Plan,
} from '../../../workers/engine';
import type { EngineWorkerApi, RecordingInput } from '../../../workers/protocol';
import { simulatedPlan, simulatedRecording } from './simulated';

/** The entry itself, on the far side of a message channel as a browser would have it. */
let worker: Comlink.Remote<EngineWorkerApi>;
let recordings: RecordingInput[];
const channel = new MessageChannel();

beforeAll(async () => {
  const { port1: inside, port2: outside } = channel;
  vi.stubGlobal('addEventListener', inside.addEventListener.bind(inside));
  vi.stubGlobal('removeEventListener', inside.removeEventListener.bind(inside));
  vi.stubGlobal('postMessage', inside.postMessage.bind(inside));
  inside.start();
  await import('../../../workers/engine-worker');
  worker = Comlink.wrap<EngineWorkerApi>(outside);
  const { facts, blob } = await simulatedRecording();
  recordings = [{ facts, blob }];
});

afterAll(() => {
  channel.port1.close();
  channel.port2.close();
  vi.unstubAllGlobals();
});

type Ranges = [number, number][];

/** A whole run through the worker, its parts cut and ordered as told. */
async function run(plan: Plan, cuts: { epochs: Ranges; draws: Ranges; pairs: Ranges }) {
  const facts = recordings.map((recording) => recording.facts);
  const axes = axesOf(plan, facts);
  const planned = planEpochs(plan, facts).epochs;
  const lost = await worker.screen(plan, recordings, planned);
  const epochs = planned.filter((epoch) => !lost.some(({ onsetS }) => onsetS === epoch.onsetS));
  const epochsA = epochs.filter((epoch) => epoch.condition === 'a').length;
  const counts = { epochsA, epochsB: epochs.length - epochsA };
  const phases = {
    ...counts,
    buffer: new SharedArrayBuffer(layoutOf(plan, axes, epochs.length).byteLength),
  };
  const draws = { buffer: new SharedArrayBuffer(drawsByteLength(plan, axes, counts)) };
  for (const [from, to] of cuts.epochs) {
    await worker.phases(
      plan,
      recordings,
      epochs,
      { from, to: Math.min(to, epochs.length) },
      phases,
    );
  }
  for (const [from, to] of cuts.draws) {
    await worker.draws(plan, { ...counts, axes }, { from, to }, draws);
  }
  const heard: number[] = [];
  const gatherer = new BlockGatherer(axes, plan.test);
  for (const [from, to] of cuts.pairs) {
    const onPair = Comlink.proxy((done: number) => heard.push(done));
    gatherer.add(await worker.pairs(plan, axes, { from, to }, phases, draws, onPair));
  }
  const concluded = await worker.conclude(plan, axes, counts, gatherer.finish());
  return { ...concluded, axes, counts, phases, lost, heard };
}

const whole = { epochs: [[0, 999]], draws: [[0, 199]], pairs: [[0, 3]] } satisfies Record<
  string,
  Ranges
>;
const inParts = {
  epochs: [
    [20, 999],
    [0, 20],
  ],
  draws: [
    [150, 199],
    [0, 150],
  ],
  pairs: [
    [2, 3],
    [0, 1],
    [1, 2],
  ],
} satisfies Record<string, Ranges>;

describe('the engine worker', () => {
  test.each(['labels', 'trial-order', 'time-shift'] as const)(
    'gives the same digest and maps for a run in one part or in many, in any order: %s',
    async (nullId) => {
      const plan = simulatedPlan({ null: nullId });
      const one = await run(plan, whole);
      const many = await run(plan, inParts);
      expect(many.outcome.digest).toBe(one.outcome.digest);
      expect(many.maps).toEqual(one.maps);
      expect(many.heard).toEqual([1, 1, 1]);
      expect(one.heard).toEqual([1, 2, 3]);
    },
  );

  test('another seed gives another digest', async () => {
    const plan = simulatedPlan();
    const other = { ...plan, test: { ...plan.test, seed: 'ebb' } };
    const digests = [await run(plan, whole), await run(other, whole)].map((r) => r.outcome.digest);
    expect(digests[0]).not.toBe(digests[1]);
  });

  test('finds the coupling that was planted at 10 Hz between F3 and C3, and no other pair', async () => {
    const { outcome, axes } = await run(simulatedPlan(), whole);
    const { edges } = outcome.corrections[0];
    expect(edges.length).toBeGreaterThan(0);
    for (const edge of edges) {
      expect(axes.pairs[edge.pair]).toEqual([0, 1]);
      expect(edge.fromHz).toBe(10);
      expect(edge.z).toBeGreaterThan(0);
    }
  });

  test('leaves out epochs beyond the plan’s limits', async () => {
    const plan = simulatedPlan();
    plan.epoch.reject.aboveUv = 1;
    const facts = recordings.map((recording) => recording.facts);
    const { epochs } = planEpochs(plan, facts);
    const lost = await worker.screen(plan, recordings, epochs);
    expect(lost.length).toBe(epochs.length);
    expect(new Set(lost.map((epoch) => epoch.reason))).toEqual(new Set(['above-limit']));
  });

  test.each(['labels', 'time-shift'] as const)(
    'hands phases over as bytes that give back ISPC to their resolution: %s',
    async (nullId) => {
      const plan = simulatedPlan({ null: nullId });
      const { maps, axes, counts, phases } = await run(plan, whole);
      const bytes = await worker.phaseBytes(plan, axes, phases);
      const points = axes.frequenciesHz.length * axes.timesS.length;
      const epochCount = counts.epochsA + counts.epochsB;
      expect(bytes.length).toBe(axes.sites.length * epochCount * points);
      axes.pairs.forEach(([j, k], pair) => {
        for (let point = 0; point < points; point++) {
          let [re, im] = [0, 0];
          for (let n = 0; n < counts.epochsA; n++) {
            const angle = (site: number) => bytes[(site * epochCount + n) * points + point];
            const difference = ((angle(j) - angle(k)) * 2 * Math.PI) / 256;
            re += Math.cos(difference);
            im += Math.sin(difference);
          }
          const ispc = Math.hypot(re, im) / counts.epochsA;
          // Half a step of each angle, pi / 256 rad, is the most a term can be off.
          expect(Math.abs(ispc - maps.observedA[pair * points + point])).toBeLessThan(0.025);
        }
      });
    },
  );

  test('a failure says what is wrong, across the channel', async () => {
    const plan = simulatedPlan({ sites: ['F3', 'C3', 'T9'] });
    await expect(worker.screen(plan, recordings, [])).rejects.toThrow('one.edf has no T9');
  });

  test('calibration gives a positive, finite cost of a pair and of an epoch', async () => {
    const plan = simulatedPlan();
    const axes = axesOf(
      plan,
      recordings.map((recording) => recording.facts),
    );
    const cost = await worker.calibrate(plan, { epochsA: 20, epochsB: 20, axes });
    for (const seconds of [cost.secondsPerPair, cost.secondsPerEpoch]) {
      expect(Number.isFinite(seconds) && seconds > 0).toBe(true);
    }
  });
});
