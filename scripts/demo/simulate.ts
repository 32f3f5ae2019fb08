import seedrandom from 'seedrandom';
import { normals, pinkNoise, rhythm } from './noise';

/**
 * The invented experiment: paced tapping. Tones are tapped to in blocks with the beat given
 * ("tone/cued") and in blocks where it is kept from memory ("tap/free").
 */
export const rateHz = 200;
export const sites = (
  'Fp1 Fp2 F7 F3 Fz F4 F8 FC5 FC1 FCz FC2 FC6 T7 C3 Cz C4 T8 ' +
  'CP5 CP1 CP2 CP6 P7 P3 Pz P4 P8 PO3 POz PO4 O1 Oz O2'
).split(' ');

const blockCount = 8;
const eventsPerBlock = 15;
const eventSpacingS = 1.25;
const blockPauseS = 3;
const leadInS = 3;

export interface Participant {
  code: string;
  seed: string;
  /** Standard deviation of the planted rhythm, microvolts; 0 plants nothing. */
  couplingUv: number;
}

export interface SimulatedRecording {
  samples: Float32Array[];
  events: { onsetS: number; label: 'tone/cued' | 'tap/free' }[];
  durationS: number;
}

function experimentEvents(): SimulatedRecording['events'] {
  const events: SimulatedRecording['events'] = [];
  let time = leadInS;
  for (let block = 0; block < blockCount; block++) {
    for (let i = 0; i < eventsPerBlock; i++) {
      events.push({ onsetS: time, label: block % 2 === 0 ? 'tone/cued' : 'tap/free' });
      time += eventSpacingS;
    }
    time += blockPauseS;
  }
  return events;
}

/** Adds a rhythm to a site around each event that is chosen, rising and falling smoothly. */
function addAround(
  target: Float32Array,
  source: Float64Array,
  options: { onsets: number[]; scaleUv: number; delaySamples: number },
): void {
  const from = Math.round(0.1 * rateHz);
  const to = Math.round(0.75 * rateHz);
  for (const onset of options.onsets) {
    const start = Math.round(onset * rateHz);
    for (let i = from; i < to; i++) {
      const gate = Math.sin((Math.PI * (i - from)) / (to - from)) ** 2;
      const at = start + i;
      target[at] += options.scaleUv * gate * source[at - options.delaySamples];
    }
  }
}

/** One participant's recording, the same for the same seed. */
export function simulate(participant: Participant): SimulatedRecording {
  const normal = normals(seedrandom(participant.seed));
  const events = experimentEvents();
  const durationS = Math.ceil(events[events.length - 1].onsetS + leadInS);
  const count = durationS * rateHz;
  const onsets = (label: string) => events.filter((e) => e.label === label).map((e) => e.onsetS);
  const cued = onsets('tone/cued');
  const free = onsets('tap/free');

  const samples = background(count, normal);
  const at = (site: string) => samples[sites.indexOf(site)];
  const beat = () => rhythm(count, rateHz, { hz: 10, memoryS: 0.5, normal });

  // The planted effect: while the beat is given, three sites follow one rhythm with fixed lags;
  // while it is kept from memory each has a rhythm of its own, of the same strength.
  const shared = beat();
  const planted = [
    { site: 'C3', scale: 1, delaySamples: 0 },
    { site: 'P4', scale: 1, delaySamples: 3 },
    { site: 'Pz', scale: 0.8, delaySamples: 2 },
  ];
  for (const { site, scale, delaySamples } of planted) {
    const scaleUv = scale * participant.couplingUv;
    addAround(at(site), shared, { onsets: cued, scaleUv, delaySamples });
    addAround(at(site), beat(), { onsets: free, scaleUv, delaySamples: 0 });
  }

  // The false friend: one source seen by two neighbours at once, without any lag, and only while
  // the beat is given. It looks like synchrony between sites and is none.
  const conducted = beat();
  const scaleUv = participant.couplingUv;
  for (const [site, share] of [['F8', 0.9] as const, ['FC6', 0.8] as const]) {
    addAround(at(site), conducted, { onsets: cued, scaleUv: share * scaleUv, delaySamples: 0 });
    addAround(at(site), beat(), { onsets: free, scaleUv: share * scaleUv, delaySamples: 0 });
  }

  blink(samples, events, seedrandom(`${participant.seed}/blinks`));
  return { samples, events, durationS };
}

/** 1/f background and alpha of each site, its neighbours' a little, and the shared reference. */
function background(count: number, normal: () => number): Float32Array[] {
  const own = sites.map((site) => {
    const noise = pinkNoise(count, rateHz, normal);
    const alpha = rhythm(count, rateHz, { hz: 10, memoryS: 0.3, normal });
    const alphaUv = /^(P|O)/.test(site) ? 5 : 2.5;
    return Float64Array.from(noise, (value, i) => 9 * value + alphaUv * alpha[i]);
  });
  const reference = pinkNoise(count, rateHz, normal);
  return own.map((signal, s) => {
    const before = own[(s + sites.length - 1) % sites.length];
    const after = own[(s + 1) % sites.length];
    return Float32Array.from(
      signal,
      (value, i) => value + 0.15 * (before[i] + after[i]) - 3 * reference[i],
    );
  });
}

/** A few blinks inside epochs, so that the amplitude limit has something to leave out. */
function blink(
  samples: Float32Array[],
  events: SimulatedRecording['events'],
  uniform: () => number,
): void {
  const width = Math.round(0.25 * rateHz);
  for (const event of events) {
    if (uniform() > 0.05) continue;
    const start = Math.round((event.onsetS + 0.1 + 0.4 * uniform()) * rateHz);
    for (const [site, peakUv] of [['Fp1', 260] as const, ['Fp2', 240] as const]) {
      const signal = samples[sites.indexOf(site)];
      for (let i = 0; i < width; i++)
        signal[start + i] += peakUv * Math.sin((Math.PI * i) / width) ** 2;
    }
  }
}
