import seedrandom from 'seedrandom';
import type { Plan } from '../../../workers/engine/plan';
import { bytesOf, factsOf, openEdf, writeEdf, type RecordingSource } from '../../../workers/engine';
import { samplePlan, shaOne } from '../sample-plan';

const rate = 100;
const seconds = 120;

/**
 * A simulated recording: noise at every site and a 10 Hz rhythm whose phase drifts; F3 and C3 share
 * it after a cue and go apart after a tap.
 */
export async function simulatedRecording(): Promise<RecordingSource & { blob: Blob }> {
  const random = seedrandom('coupled');
  const events = Array.from({ length: 40 }, (_, i) => ({
    onsetS: 3 + 2.8 * i,
    text: i % 2 === 0 ? 'cue' : 'tap',
  }));
  const sites = ['F3', 'C3', 'P4'].map(() => new Float64Array(seconds * rate));
  // The first event, a cue, lies in the second stretch.
  for (let start = 0; start < sites[0].length; start += 280) {
    const cued = ((start / 280) | 0) % 2 === 1;
    const shared = 2 * Math.PI * random();
    sites.forEach((samples, site) => {
      const own = site < 2 && cued ? shared : 2 * Math.PI * random();
      for (let i = start; i < Math.min(start + 280, samples.length); i++) {
        samples[i] = 20 * Math.cos((2 * Math.PI * 10 * i) / rate + own) + 30 * (random() - 0.5);
      }
    });
  }
  const bytes = writeEdf({
    startedAt: '2026-01-01T00:00:00',
    recordDurationS: 1,
    signals: ['F3', 'C3', 'P4'].map((label, site) => ({
      label,
      unit: 'uV',
      physicalMin: -100,
      physicalMax: 100,
      samplesPerRecord: rate,
      samples: sites[site],
    })),
    annotations: events,
  });
  const source = bytesOf(bytes);
  const { facts } = await factsOf(await openEdf(source), { sha256: shaOne, name: 'one.edf' });
  return { facts, source, blob: new Blob([new Uint8Array(bytes)]) };
}

export function simulatedPlan(change: Partial<Plan> = {}): Plan {
  return samplePlan({
    recordings: [{ sha256: shaOne, name: 'one.edf' }],
    test: {
      ...samplePlan().test,
      permutations: 199,
      corrections: ['max-statistic', 'cluster-mass', 'benjamini-hochberg'],
    },
    ...change,
  });
}
