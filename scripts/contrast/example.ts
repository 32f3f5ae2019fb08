import { planSchema, type Plan } from '$engine';

/** A whole plan to start from: its recording is a stand-in, everything else can be run. */
export function examplePlan(): Plan {
  const sha256 = '0'.repeat(64);
  const rule = (label: string) => ({ kind: 'events' as const, recording: sha256, labels: [label] });
  return planSchema.parse({
    format: 'nullwright-plan/1',
    question: 'Do frontal and parietal sites synchronise more after the cue than in free taps?',
    participant: 'P01',
    // The SHA-256 of the recording, as sha256sum prints it, here and in every rule.
    recordings: [{ sha256, name: 'sub-01_task-tapping_eeg.edf' }],
    a: { name: 'cued', rules: [rule('cue')] },
    b: { name: 'free', rules: [rule('tap')] },
    epoch: {
      fromS: -0.2,
      toS: 0.8,
      detrend: 'mean',
      reference: { kind: 'average' },
      reject: { aboveUv: 150, flatBelowUv: 0.5, byHand: [] },
    },
    sites: ['F3', 'Fz', 'F4', 'P3', 'Pz', 'P4'],
    pairs: { kind: 'between', first: ['F3', 'Fz', 'F4'], second: ['P3', 'Pz', 'P4'] },
    phase: {
      method: 'morlet',
      frequencies: { kind: 'grid', fromHz: 4, toHz: 30, steps: 12, spacing: 'log' },
      cycles: { from: 4, to: 8 },
    },
    times: { fromS: 0, toS: 0.6, stepS: 0.05 },
    measure: 'ispc',
    null: 'labels',
    test: {
      tail: 'two-sided',
      alpha: 0.05,
      permutations: 1000,
      corrections: ['cluster-mass', 'max-statistic'],
      clusterFormingZ: 2.5,
      seed: 'heron-1',
    },
  });
}
