import { describe, expect, test } from 'vitest';
import { consequencesOf, type CautionCode } from '../../../workers/engine/consequences';
import type { Plan } from '../../../workers/engine/plan';
import type { RecordingFacts } from '../../../workers/engine/types';
import {
  sampleChannel,
  samplePlan,
  sampleRecording,
  secondRecording,
  shaTwo,
} from '../sample-plan';

/** Cues and taps in turn, every 2 s from 3 s on; `pattern` gives the order. */
function inOrder(pattern: string, change: Partial<RecordingFacts> = {}): RecordingFacts[] {
  const events = [...pattern].map((letter, i): [number, string] => [
    3 + 2 * i,
    letter === 'A' ? 'cue' : 'tap',
  ]);
  const segments = [{ startS: 0, durationS: 10 + 2 * pattern.length }];
  return [sampleRecording(events, { segments, ...change }), secondRecording()];
}

const alternating = 'AB'.repeat(30);
const epochWith = (change: Partial<Plan['epoch']>) => ({ ...samplePlan().epoch, ...change });
const testWith = (change: Partial<Plan['test']>) => ({ ...samplePlan().test, ...change });

function codes(change: Partial<Plan> = {}, recordings = inOrder(alternating)): CautionCode[] {
  return consequencesOf(samplePlan(change), recordings).cautions.map((caution) => caution.code);
}

describe('consequencesOf', () => {
  test('states tests, epochs, chance, kernels, guard and memory of a plan', () => {
    const found = consequencesOf(samplePlan(), inOrder(alternating));
    expect(found).toMatchObject({ pairs: 3, frequencies: 2, times: 5, tests: 30 });
    expect(found.epochs).toEqual({ a: 30, b: 30 });
    expect(found.smallestP).toBeCloseTo(0.001, 12);
    expect(found.smallestUncorrectedP).toBeCloseTo(0.002, 12);
    expect(found.chance.a).toBeCloseTo(Math.sqrt(Math.PI / 120), 12);
    expect(found.kernels.map((kernel) => kernel.frequencyHz)).toEqual([10, 20]);
    expect(found.guardS).toBe(0.32);
    // 3 sites, 60 epochs, 2 frequencies, 5 times, real and imaginary parts of 4 bytes.
    expect(found.phaseBytes).toBe(3 * 60 * 2 * 5 * 8);
  });

  test('a null that shifts in time keeps the whole window in memory', () => {
    const found = consequencesOf(samplePlan({ null: 'time-shift' }), inOrder(alternating));
    expect(found.phaseBytes).toBe(3 * 60 * 2 * 101 * 8);
  });

  test('the smallest difference at 118 and 121 epochs is 0.21 at z = 3.5', () => {
    const recordings = inOrder('AB'.repeat(118) + 'BBB');
    const { smallestDifference } = consequencesOf(samplePlan(), recordings);
    expect(smallestDifference.z).toBe(3.5);
    expect(smallestDifference.difference).toBeCloseTo(0.21, 2);
  });

  test('relabellings are counted while they can be', () => {
    expect(consequencesOf(samplePlan(), inOrder('ABABABAB')).arrangements).toBe(70);
    expect(consequencesOf(samplePlan(), inOrder(alternating)).arrangements).toBe(null);
  });

  test('a careful plan hears only how to read its outcome', () => {
    expect(codes({ times: { fromS: 0, toS: 0.8, stepS: 0.4 } })).toEqual(['shared-sources']);
  });

  test('nulls without synchrony warn of pairs that are synchronous in both conditions', () => {
    expect(codes({ null: 'trial-order' })).toContain('synchrony-in-both');
    expect(codes({ null: 'time-shift' })).toContain('synchrony-in-both');
    expect(codes({ null: 'labels' })).not.toContain('synchrony-in-both');
  });

  test('a plan without epochs is stopped, and says which condition has none', () => {
    const { cautions, epochs } = consequencesOf(samplePlan(), inOrder('AAAA'));
    expect(epochs).toEqual({ a: 4, b: 0 });
    expect(cautions[0]).toMatchObject({ code: 'too-few-epochs', severity: 'stop' });
    expect(cautions[0].message).toContain('B, free, has 0');
  });

  test.each<[CautionCode, Partial<Plan>, RecordingFacts[]?]>([
    ['few-permutations', { test: testWith({ permutations: 19, alpha: 0.01 }) }],
    ['few-permutations', { test: testWith({ corrections: ['benjamini-hochberg'] }) }],
    ['coarse-p', { test: testWith({ permutations: 199 }) }],
    ['few-for-maxima', { test: testWith({ permutations: 499 }) }],
    ['few-arrangements', {}, inOrder('ABABAB')],
    ['few-epochs', {}, inOrder('ABABABAB')],
    ['unequal-epochs', {}, inOrder('AAB'.repeat(20))],
    ['conditions-in-blocks', {}, inOrder('A'.repeat(30) + 'B'.repeat(30))],
    ['epochs-overlap', { epoch: epochWith({ fromS: -0.2, toS: 1.9 }) }],
    [
      'epochs-overlap',
      {
        times: { fromS: -0.1, toS: 1.85, stepS: 0.1 },
        epoch: epochWith({ fromS: -0.1, toS: 1.9 }),
      },
    ],
    [
      'bad-site',
      {},
      inOrder(alternating, {
        channels: ['F3', 'C3', 'P4'].map((site) => sampleChannel(site, { bad: site === 'C3' })),
      }),
    ],
    ['reference-of-few', { epoch: epochWith({ reference: { kind: 'average' } }) }],
    [
      'reference-analysed',
      { epoch: epochWith({ reference: { kind: 'channels', sites: ['F3', 'Oz'] } }) },
    ],
    ['short-window-for-shifts', { null: 'time-shift' }],
    ['wide-kernels', { times: { fromS: 0, toS: 0.8, stepS: 0.1 } }],
    [
      'line-frequency',
      {
        phase: {
          method: 'morlet',
          frequencies: { kind: 'list', hz: [10, 47] },
          cycles: { from: 5, to: 5 },
        },
      },
    ],
    ['cluster-claim', { test: testWith({ corrections: ['cluster-mass'] }) }],
    ['false-discovery-dependence', { test: testWith({ corrections: ['benjamini-hochberg'] }) }],
  ])('warns of %s', (code, change, recordings) => {
    expect(codes(change, recordings)).toContain(code);
    expect(codes({ times: { fromS: 0, toS: 0.8, stepS: 0.4 } })).not.toContain(code);
  });

  test('conditions of different recordings are named as such, not as blocks', () => {
    const rest = [3, 5, 7, 9].map((onset): [number, string] => [onset, 'tap']);
    const found = codes(
      { b: { name: 'free', rules: [{ kind: 'events', recording: shaTwo, labels: ['tap'] }] } },
      [inOrder('AAAA')[0], secondRecording(rest)],
    );
    expect(found).toContain('different-recordings');
    expect(found).not.toContain('conditions-in-blocks');
  });

  test('order says which condition came first, and its p', () => {
    const { cautions } = consequencesOf(samplePlan(), inOrder('BBBBBBBBAAAAAAAA'));
    const caution = cautions.find(({ code }) => code === 'conditions-in-blocks')!;
    expect(caution.message).toMatch(/^B comes mostly before A \(runs test, p < 0\.001\)/);
  });

  test('screened epochs take the place of those the metadata allow', () => {
    const found = consequencesOf(samplePlan(), inOrder(alternating), { epochs: [], lost: [] });
    expect(found.epochs).toEqual({ a: 0, b: 0 });
    expect(found.chance).toEqual({ a: null, b: null });
  });

  test('many lost epochs are worth a word', () => {
    const recordings = inOrder(alternating, { segments: [{ startS: 0, durationS: 80 }] });
    const { cautions, lost } = consequencesOf(samplePlan(), recordings);
    expect(lost.length).toBeGreaterThan(20);
    expect(cautions.map(({ code }) => code)).toContain('epochs-lost');
  });

  test('a window longer than a shift can be drawn for stops the plan', () => {
    const epoch = epochWith({ fromS: -0.2, toS: 660 });
    const recordings = inOrder(alternating, { segments: [{ startS: 0, durationS: 900 }] });
    expect(codes({ null: 'time-shift', epoch }, recordings)).toContain('window-too-long');
  });

  test('phases that no browser can hold stop the plan', () => {
    const sites = Array.from({ length: 500 }, (_, i) => `S${i}`);
    const channels = sites.map((site) => sampleChannel(site));
    const recordings = inOrder('AB'.repeat(700), { channels });
    const change = {
      sites,
      pairs: { kind: 'from', site: 'S0' } as const,
      times: { fromS: -0.2, toS: 0.8, stepS: 0.01 },
      phase: {
        method: 'morlet',
        frequencies: { kind: 'grid', fromHz: 5, toHz: 40, steps: 20, spacing: 'log' },
        cycles: { from: 5, to: 5 },
      } as const,
    };
    const [first, second] = [recordings[0], secondRecording([], { channels })];
    expect(codes(change, [first, second])).toContain('too-much-memory');
  });

  test('stops a plan whose draws do not fit into memory, and only that', () => {
    // 100,000 permutations of 3 sites and 4000 epochs in 2 bytes are 2.4 GB; labels take 57 MB.
    const recordings = inOrder('AB'.repeat(2000));
    const change = { null: 'trial-order', test: testWith({ permutations: 100_000 }) } as const;
    const found = consequencesOf(samplePlan(change), recordings);
    expect(found.drawBytes).toBe(100_000 * 3 * 4000 * 2);
    const caution = found.cautions.find(({ code }) => code === 'too-much-memory');
    expect(caution).toMatchObject({ severity: 'stop' });
    expect(caution!.message).toMatch(/draws would take 2.2 GB.*fewer permutations/);
    expect(codes({ ...change, null: 'labels' }, recordings)).not.toContain('too-much-memory');
  });
});
