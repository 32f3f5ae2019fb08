import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { planEpochs } from '../../../workers/engine/prepare/plan-epochs';
import { samplePlan, sampleRecording, secondRecording, shaOne, shaTwo } from '../sample-plan';

// 100 Hz; at 10 Hz and 5 cycles the Morlet kernel reaches ceil(4 * 5 / (2 pi 10) * 100) = 32 samples.
const guard = 32;
const two = secondRecording();

describe('planEpochs', () => {
  test('A stands before B, each in time, with the sample of its event', () => {
    const recording = sampleRecording([
      [9.304, 'tap'],
      [5.126, 'cue'],
      [7, 'tap'],
      [3, 'other'],
      [2, 'cue'],
    ]);
    const { epochs, lost } = planEpochs(samplePlan(), [recording, two]);
    expect(epochs.map(({ condition, sample }) => [condition, sample])).toEqual([
      ['a', 200],
      ['a', 513],
      ['b', 700],
      ['b', 930],
    ]);
    expect(lost).toEqual([]);
  });

  test('an epoch fits when its guard ends on the first and last sample, and not one beyond', () => {
    const firstFit = (20 + guard) / 100;
    const lastFit = (6000 - 1 - 80 - guard) / 100;
    const recording = sampleRecording([
      [firstFit, 'cue'],
      [firstFit - 0.01, 'cue'],
      [lastFit, 'cue'],
      [lastFit + 0.01, 'cue'],
      [30, 'tap'],
    ]);
    const { epochs, lost } = planEpochs(samplePlan(), [recording, two]);
    expect(epochs.map((epoch) => epoch.onsetS)).toEqual([firstFit, lastFit, 30]);
    expect(lost.map(({ onsetS, reason }) => [onsetS, reason])).toEqual([
      [firstFit - 0.01, 'guard-leaves-recording'],
      [lastFit + 0.01, 'guard-leaves-recording'],
    ]);
  });

  test('no epoch crosses a gap, and samples count from the start of their own segment', () => {
    const recording = sampleRecording(
      [
        [5, 'cue'],
        [9.5, 'cue'],
        [15, 'cue'],
        [20.4, 'cue'],
        [22.25, 'cue'],
        [70, 'cue'],
        [25, 'tap'],
      ],
      {
        segments: [
          { startS: 0.25, durationS: 10 },
          { startS: 20.25, durationS: 10 },
        ],
      },
    );
    const { epochs, lost } = planEpochs(samplePlan(), [recording, two]);
    expect(epochs.map(({ segment, sample }) => [segment, sample])).toEqual([
      [0, 475],
      [1, 200],
      [1, 475],
    ]);
    expect(lost.map(({ onsetS, reason }) => [onsetS, reason])).toEqual([
      [9.5, 'crosses-gap'],
      [15, 'crosses-gap'],
      [20.4, 'crosses-gap'],
      [70, 'guard-leaves-recording'],
    ]);
  });

  test('evenly spaced epochs include both ends of their span', () => {
    const plan = samplePlan({
      a: {
        name: 'rest',
        rules: [{ kind: 'even', recording: shaOne, fromS: 2, toS: 2.9, everyS: 0.3 }],
      },
      b: {
        name: 'task',
        rules: [{ kind: 'even', recording: shaTwo, fromS: 2, toS: 5, everyS: 1 }],
      },
    });
    const { epochs } = planEpochs(plan, [sampleRecording([]), two]);
    expect(epochs.map(({ recording, sample }) => [recording, sample])).toEqual([
      [shaOne, 200],
      [shaOne, 230],
      [shaOne, 260],
      [shaOne, 290],
      ...[200, 300, 400, 500].map((sample) => [shaTwo, sample]),
    ]);
  });

  test('an event that two rules of a condition take makes one epoch', () => {
    const plan = samplePlan({
      a: {
        name: 'cued',
        rules: [
          { kind: 'events', recording: shaOne, labels: ['cue'] },
          { kind: 'events', recording: shaOne, labels: ['cue', 'loud'] },
        ],
      },
    });
    const recording = sampleRecording([
      [5, 'cue'],
      [5, 'loud'],
      [8, 'loud'],
      [12, 'tap'],
    ]);
    const { epochs } = planEpochs(plan, [recording, two]);
    expect(epochs.map((epoch) => epoch.onsetS)).toEqual([5, 8, 12]);
  });

  test('an event in A and in B is refused, with its label, time and recording', () => {
    const recording = sampleRecording([
      [5, 'cue'],
      [5, 'tap'],
    ]);
    expect(() => planEpochs(samplePlan(), [recording, two])).toThrow(
      'The event tap at 5 s of one.edf would be in A and in B',
    );
  });

  test('an epoch marked by hand is left out under that reason', () => {
    const plan = samplePlan();
    plan.epoch.reject.byHand = [{ recording: shaOne, onsetS: 5.0001 }];
    const recording = sampleRecording([
      [5, 'cue'],
      [8, 'cue'],
      [12, 'tap'],
    ]);
    const { epochs, lost } = planEpochs(plan, [recording, two]);
    expect(epochs.map((epoch) => epoch.onsetS)).toEqual([8, 12]);
    expect(lost).toEqual([
      { condition: 'a', recording: shaOne, onsetS: 5, label: 'cue', reason: 'by-hand' },
    ]);
  });

  test('whatever the segments and events, each event is kept inside one segment or lost', () => {
    const pieces = fc.array(
      fc.record({ gapS: fc.double({ min: 0.3, max: 9, noNaN: true }), durationS: fc.nat(9) }),
      { maxLength: 8 },
    );
    const onsets = fc.array(fc.double({ min: -2, max: 90, noNaN: true }), { maxLength: 30 });
    fc.assert(
      fc.property(pieces, onsets, (parts, times) => {
        let end = 0;
        const segments = parts.map(({ gapS, durationS }) => {
          const segment = { startS: end + gapS, durationS };
          end = segment.startS + durationS;
          return segment;
        });
        const events = times.map((time): [number, string] => [time, 'cue']);
        const { epochs, lost } = planEpochs(samplePlan(), [
          sampleRecording(events, { segments }),
          two,
        ]);
        expect(epochs.length + lost.length).toBe(
          new Set(times.map((time) => Math.round(time * 100) + 0)).size,
        );
        for (const { segment, sample, onsetS } of epochs) {
          const { startS, durationS } = segments[segment];
          expect(sample - 20 - guard).toBeGreaterThanOrEqual(0);
          expect(sample + 80 + guard).toBeLessThan(durationS * 100);
          expect(Math.abs(startS + sample / 100 - onsetS)).toBeLessThanOrEqual(0.005 + 1e-9);
        }
        for (const { onsetS } of lost) {
          const roomy = segments.some(
            ({ startS, durationS }) =>
              onsetS - startS > 0.53 && startS + durationS - onsetS > 0.2 + 0.6 + 0.34,
          );
          expect(roomy).toBe(false);
        }
      }),
      { numRuns: 300, seed: 11 },
    );
  });

  test('a span with more epochs than can be meant is refused before any is made', () => {
    const plan = samplePlan({
      a: {
        name: 'rest',
        rules: [{ kind: 'even', recording: shaOne, fromS: 0, toS: 1e9, everyS: 1e-3 }],
      },
    });
    expect(() => planEpochs(plan, [sampleRecording([]), two])).toThrow('space them wider');
  });
});
