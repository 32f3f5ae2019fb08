import type { Plan } from '../../workers/engine/plan';
import type { ChannelFacts, EventFacts, RecordingFacts, Segment } from '../../workers/engine/types';

/** A plan and recordings that fit each other, for tests to bend. */
export const shaOne = '1'.repeat(64);
export const shaTwo = '2'.repeat(64);

export function samplePlan(change: Partial<Plan> = {}): Plan {
  return {
    format: 'nullwright-plan/1',
    question: 'Do F3 and P4 synchronise more when cued?',
    participant: 'P01',
    recordings: [
      { sha256: shaOne, name: 'one.edf' },
      { sha256: shaTwo, name: 'two.edf' },
    ],
    a: { name: 'cued', rules: [{ kind: 'events', recording: shaOne, labels: ['cue'] }] },
    b: { name: 'free', rules: [{ kind: 'events', recording: shaOne, labels: ['tap'] }] },
    epoch: {
      fromS: -0.2,
      toS: 0.8,
      detrend: 'mean',
      reference: { kind: 'recorded' },
      reject: { aboveUv: null, flatBelowUv: null, byHand: [] },
    },
    sites: ['F3', 'C3', 'P4'],
    pairs: { kind: 'all' },
    phase: {
      method: 'morlet',
      frequencies: { kind: 'list', hz: [10, 20] },
      cycles: { from: 5, to: 5 },
    },
    times: { fromS: 0, toS: 0.8, stepS: 0.2 },
    measure: 'ispc',
    null: 'labels',
    test: {
      tail: 'two-sided',
      alpha: 0.05,
      permutations: 999,
      corrections: ['max-statistic'],
      clusterFormingZ: 2,
      seed: 'tide',
    },
    ...change,
  };
}

export function sampleChannel(site: string, change: Partial<ChannelFacts> = {}): ChannelFacts {
  return {
    label: site,
    site,
    unit: 'uV',
    samplingRateHz: 100,
    bad: false,
    position: null,
    ...change,
  };
}

/** 100 Hz, 60 s in one piece unless told otherwise, events given as [onset, label]. */
export function sampleRecording(
  events: [number, string][],
  change: Partial<RecordingFacts> = {},
): RecordingFacts {
  const segments: Segment[] = [{ startS: 0, durationS: 60 }];
  const list: EventFacts[] = events.map(([onsetS, label]) => ({ onsetS, label, durationS: null }));
  return {
    sha256: shaOne,
    name: 'one.edf',
    segments,
    channels: ['F3', 'C3', 'P4', 'Oz'].map((site) => sampleChannel(site)),
    events: list,
    ...change,
  };
}

/** The same, as the plan's second recording. */
export function secondRecording(
  events: [number, string][] = [],
  change: Partial<RecordingFacts> = {},
): RecordingFacts {
  return sampleRecording(events, { sha256: shaTwo, name: 'two.edf', ...change });
}
