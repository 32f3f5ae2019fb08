import { describe, expect, test } from 'vitest';
import { PlanError } from '../../../workers/engine/errors';
import { axesOf } from '../../../workers/engine/prepare/axes';
import type { Plan } from '../../../workers/engine/plan';
import { sampleChannel, samplePlan, sampleRecording, secondRecording } from '../sample-plan';

const recordings = [sampleRecording([]), secondRecording()];
const grid = (frequencies: Plan['phase']['frequencies']) =>
  samplePlan({ phase: { method: 'morlet', frequencies, cycles: { from: 5, to: 5 } } });

function fieldOf(run: () => unknown): string {
  try {
    run();
  } catch (error) {
    if (error instanceof PlanError) return error.field;
    throw error;
  }
  return 'no error';
}

describe('axesOf', () => {
  test('all pairs stand in the order of the sites, the lower index first', () => {
    expect(axesOf(samplePlan(), recordings).pairs).toEqual([
      [0, 1],
      [0, 2],
      [1, 2],
    ]);
  });

  test('pairs between groups count a pair once, whichever group its sites are in', () => {
    const pairs = { kind: 'between', first: ['P4'], second: ['F3', 'P4'] } as const;
    const plan = samplePlan({ pairs: { ...pairs, first: ['P4'], second: ['F3', 'P4'] } });
    expect(axesOf(plan, recordings).pairs).toEqual([[0, 2]]);
  });

  test('pairs from one site join it to every other', () => {
    const plan = samplePlan({ pairs: { kind: 'from', site: 'C3' } });
    expect(axesOf(plan, recordings).pairs).toEqual([
      [0, 1],
      [1, 2],
    ]);
  });

  test('a log grid has equal ratios and ends exactly on its last frequency', () => {
    const plan = grid({ kind: 'grid', fromHz: 4, toHz: 32, steps: 4, spacing: 'log' });
    const hz = axesOf(plan, recordings).frequenciesHz;
    [4, 8, 16, 32].forEach((expected, i) => expect(hz[i]).toBeCloseTo(expected, 12));
    expect(hz[3]).toBe(32);
  });

  test('a linear grid has equal steps', () => {
    const plan = grid({ kind: 'grid', fromHz: 4, toHz: 10, steps: 4, spacing: 'linear' });
    expect(axesOf(plan, recordings).frequenciesHz).toEqual([4, 6, 8, 10]);
  });

  test('kept times are the times of the nearest samples', () => {
    const plan = samplePlan({ times: { fromS: 0, toS: 0.1, stepS: 0.033 } });
    expect(axesOf(plan, recordings).timesS).toEqual([0, 0.03, 0.07, 0.1]);
  });

  test('the last time is kept although decimal steps add up inexactly', () => {
    const plan = samplePlan({ times: { fromS: 0.1, toS: 0.7, stepS: 0.1 } });
    expect(axesOf(plan, recordings).timesS).toEqual([0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7]);
  });

  test.each<[string, Partial<Plan>, string]>([
    ['a site that no recording has', { sites: ['F3', 'T9'] }, 'sites'],
    ['pairs that name a foreign site', { pairs: { kind: 'from', site: 'Oz' } }, 'pairs.site'],
    ['times outside the window', { times: { fromS: 0, toS: 0.9, stepS: 0.1 } }, 'times.toS'],
    ['a step below a sample', { times: { fromS: 0, toS: 0.1, stepS: 0.004 } }, 'times.stepS'],
    ['a frequency at half the rate', grid({ kind: 'list', hz: [10, 50] }), 'phase.frequencies'],
    ['frequencies out of order', grid({ kind: 'list', hz: [20, 10] }), 'phase.frequencies'],
    [
      'a grid of one step over a span',
      grid({ kind: 'grid', fromHz: 4, toHz: 8, steps: 1, spacing: 'log' }),
      'phase.frequencies.steps',
    ],
    [
      'the only reference site among the analysed',
      { epoch: { ...samplePlan().epoch, reference: { kind: 'channels', sites: ['F3'] } } },
      'epoch.reference',
    ],
    [
      'the mean of two sites',
      { sites: ['F3', 'C3'], epoch: { ...samplePlan().epoch, reference: { kind: 'average' } } },
      'epoch.reference',
    ],
    [
      'a reference that no recording has',
      { epoch: { ...samplePlan().epoch, reference: { kind: 'channels', sites: ['A1'] } } },
      'epoch.reference',
    ],
  ])('refuses %s', (_, change, field) => {
    expect(fieldOf(() => axesOf(samplePlan(change), recordings))).toBe(field);
  });

  test('names every channel whose sampling rate is not the common one', () => {
    const odd = secondRecording([], {
      channels: ['F3', 'C3', 'P4'].map((site) =>
        sampleChannel(site, site === 'C3' ? { samplingRateHz: 250 } : {}),
      ),
    });
    expect(() => axesOf(samplePlan(), [recordings[0], odd])).toThrow(
      'Most have 100 Hz, but not C3 (250 Hz in two.edf)',
    );
  });

  test('names a site that two channels of a recording claim', () => {
    const twice = sampleRecording([], {
      channels: ['F3', 'F3', 'C3', 'P4'].map((site) => sampleChannel(site)),
    });
    expect(() => axesOf(samplePlan(), [twice, recordings[1]])).toThrow(
      'one.edf has more than one channel for F3',
    );
  });

  test('names the recording that is not here', () => {
    expect(() => axesOf(samplePlan(), [recordings[0]])).toThrow(
      'The recording two.edf is not here',
    );
  });

  test('refuses more tests than a run can hold, with the numbers that make them', () => {
    const sites = Array.from({ length: 200 }, (_, i) => `S${i}`);
    const many = [sampleRecording([]), secondRecording()].map((recording) => ({
      ...recording,
      channels: sites.map((site) => sampleChannel(site)),
    }));
    const plan = samplePlan({
      sites,
      phase: {
        method: 'morlet',
        frequencies: { kind: 'grid', fromHz: 4, toHz: 40, steps: 20, spacing: 'log' },
        cycles: { from: 5, to: 5 },
      },
      times: { fromS: 0, toS: 0.8, stepS: 0.02 },
    });
    expect(() => axesOf(plan, many)).toThrow('19,900 pairs × 20 frequencies × 41 times');
  });
});
