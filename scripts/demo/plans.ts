import { planSchema, type Plan } from '$engine';
import { sites } from './simulate';

/** What the demo's plans share; each names its own recording, sites and size. */
function base({ sha256, name }: { sha256: string; name: string }, participant: string): Plan {
  const rule = (label: string) => ({
    kind: 'events' as const,
    recording: sha256,
    labels: [label],
  });
  return {
    format: 'nullwright-plan/1',
    question: '',
    participant,
    recordings: [{ sha256, name }],
    a: { name: 'cued', rules: [rule('tone/cued')] },
    b: { name: 'free', rules: [rule('tap/free')] },
    epoch: {
      fromS: -0.2,
      toS: 0.9,
      detrend: 'mean',
      reference: { kind: 'recorded' },
      reject: { aboveUv: 150, flatBelowUv: 0.5, byHand: [] },
    },
    sites,
    pairs: { kind: 'all' },
    phase: {
      method: 'morlet',
      frequencies: { kind: 'grid', fromHz: 4, toHz: 30, steps: 12, spacing: 'log' },
      cycles: { from: 4, to: 8 },
    },
    times: { fromS: -0.2, toS: 0.88, stepS: 0.04 },
    measure: 'ispc',
    null: 'labels',
    test: {
      tail: 'two-sided',
      alpha: 0.05,
      permutations: 1000,
      corrections: ['cluster-mass', 'max-statistic', 'benjamini-hochberg'],
      clusterFormingZ: 2.5,
      seed: 'tide-2',
    },
  };
}

/** The contrast that the demo has run already. */
export function finishedPlan(recording: { sha256: string; name: string }): Plan {
  const plan = base(recording, 'P02');
  plan.question =
    'Do left motor and right parietal sites synchronise more when the beat is given than when it is kept from memory?';
  plan.sites = 'Fp1 Fp2 F7 F3 Fz F4 F8 FC6 T7 C3 Cz C4 T8 P7 P3 Pz P4 P8 O1 O2'.split(' ');
  return planSchema.parse(plan);
}

/** The contrast that waits to be run. */
export function readyPlan(recording: { sha256: string; name: string }): Plan {
  const plan = base(recording, 'P01');
  plan.question = 'Does giving the beat synchronise any two of 32 sites more than keeping it?';
  plan.test.seed = 'ebb-1';
  return planSchema.parse(plan);
}
