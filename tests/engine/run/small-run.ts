import { writeEdf, type Plan } from '../../../workers/engine';

const rate = 64;
const seconds = 60;
const sites = ['F3', 'C3', 'P4'];

/** A generator of our own choice of seed (mulberry32), so that every test sees the same signal. */
function noise(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296 - 0.5;
  };
}

/** Three sites for a minute: F3 and C3 share a 10 Hz rhythm in the first half (A), P4 is noise. */
export function smallRecording(): Uint8Array {
  const count = rate * seconds;
  const signals = sites.map((label, site) => {
    const random = noise(site + 1);
    const drift = noise(100 + site);
    let phase = 0;
    const samples = Float64Array.from({ length: count }, (_, i) => {
      const coupled = site < 2 && i < count / 2;
      phase += drift() * 0.8;
      const rhythm = Math.sin(2 * Math.PI * 10 * (i / rate) + (coupled ? 0.7 * site : phase));
      return 20 * rhythm + 20 * random();
    });
    return {
      label,
      unit: 'uV',
      physicalMin: -500,
      physicalMax: 500,
      samplesPerRecord: rate,
      samples,
    };
  });
  return writeEdf({
    startedAt: '2026-01-01T00:00:00',
    recordDurationS: 1,
    signals,
    annotations: [{ onsetS: 30, text: 'half' }],
  });
}

/** Its two halves against each other, over all three pairs at two frequencies and three times. */
export function smallPlan(sha256: string, change: Partial<Plan> = {}): Plan {
  const even = (fromS: number, toS: number) => [
    { kind: 'even' as const, recording: sha256, fromS, toS, everyS: 1 },
  ];
  return {
    format: 'nullwright-plan/1',
    question: 'Do F3 and C3 synchronise more in the first half?',
    participant: 'P01',
    recordings: [{ sha256, name: 'rest.edf' }],
    // The first epoch of A has no room for its guard, so one epoch is lost.
    a: { name: 'first half', rules: even(0, 28) },
    b: { name: 'second half', rules: even(32, 57) },
    epoch: {
      fromS: 0,
      toS: 0.5,
      detrend: 'mean',
      reference: { kind: 'recorded' },
      reject: { aboveUv: 400, flatBelowUv: null, byHand: [] },
    },
    sites,
    pairs: { kind: 'all' },
    phase: {
      method: 'morlet',
      frequencies: { kind: 'list', hz: [10, 14] },
      cycles: { from: 4, to: 4 },
    },
    times: { fromS: 0, toS: 0.5, stepS: 0.25 },
    measure: 'ispc',
    null: 'labels',
    test: {
      tail: 'two-sided',
      alpha: 0.05,
      permutations: 99,
      corrections: ['max-statistic', 'cluster-mass', 'benjamini-hochberg'],
      clusterFormingZ: 2,
      seed: 'tide',
    },
    ...change,
  };
}
