import { describe, expect, test } from 'vitest';
import { axesOf } from '../../../workers/engine/prepare/axes';
import { planEpochs } from '../../../workers/engine/prepare/plan-epochs';
import { epochReader, type RecordingSource } from '../../../workers/engine/prepare/read-epoch';
import { screenEpochs } from '../../../workers/engine/prepare/screen';
import type { Plan } from '../../../workers/engine/plan';
import { bytesOf, factsOf, openEdf, writeEdf, type ByteSource } from '../../../workers/engine/read';
import { samplePlan, secondRecording, shaOne } from '../sample-plan';

const rate = 100;
const sites = ['F3', 'C3', 'P4', 'Oz'];
// The guard at 10 Hz and 5 cycles is 32 samples; the window of the sample plan -20 .. 80.
const guard = 32;

/** A value that tells site and sample apart, whole so that 16 bits keep it exactly. */
const valueAt = (site: number, sample: number) => ((site + 2) * sample * sample) % 997;

interface Making {
  events: [number, string][];
  recordStartsS?: number[];
  startS?: number;
  value?: (site: number, sample: number) => number;
}

async function recordingOf(making: Making): Promise<RecordingSource> {
  const value = making.value ?? valueAt;
  const records = making.recordStartsS?.length ?? 20;
  const bytes = writeEdf({
    startedAt: '2026-01-01T00:00:00',
    recordDurationS: 1,
    ...(making.recordStartsS ? { recordStartsS: making.recordStartsS } : {}),
    ...(making.startS ? { startS: making.startS } : {}),
    signals: sites.map((label, site) => ({
      label,
      unit: 'uV',
      physicalMin: -32768,
      physicalMax: 32767,
      samplesPerRecord: rate,
      samples: Float64Array.from({ length: records * rate }, (_, i) => value(site, i)),
    })),
    annotations: making.events.map(([onsetS, text]) => ({ onsetS, text })),
  });
  const source = bytesOf(bytes);
  const { facts } = await factsOf(await openEdf(source), { sha256: shaOne, name: 'one.edf' });
  return { facts, source };
}

const epochWith = (change: Partial<Plan['epoch']>) => ({
  epoch: { ...samplePlan().epoch, ...change },
});

async function readAll(plan: Plan, recording: RecordingSource): Promise<Float64Array[][]> {
  const facts = [recording.facts, secondRecording()];
  const { epochs } = planEpochs(plan, facts);
  const reader = epochReader(plan, axesOf(plan, facts), [recording]);
  const read: Float64Array[][] = [];
  for (const epoch of epochs) read.push(await reader.read(epoch));
  return read;
}

/** Samples of a site from `first` on, less their mean: what an epoch without reference holds. */
function expectedAt(site: number, first: number, value = valueAt): Float64Array {
  const raw = Float64Array.from({ length: 101 + 2 * guard }, (_, i) => value(site, first + i));
  const mean = raw.reduce((sum, x) => sum + x, 0) / raw.length;
  return raw.map((x) => x - mean);
}

function expectSignals(found: Float64Array[], expected: Float64Array[]): void {
  found.forEach((signal, site) => {
    expect(signal.length).toBe(expected[site].length);
    const off = signal.map((x, i) => Math.abs(x - expected[site][i]));
    // Values to 4000 in f64, 165 of them summed: rounding below 1e-9.
    expect(Math.max(...off)).toBeLessThan(1e-9);
  });
}

describe('epochReader', () => {
  test('an epoch holds the window and the guards around its event, for each site', async () => {
    const recording = await recordingOf({
      events: [
        [5.123, 'cue'],
        [8, 'tap'],
      ],
    });
    const [cue, tap] = await readAll(samplePlan(), recording);
    const from = (sample: number) => [0, 1, 2].map((site) => expectedAt(site, sample - 20 - guard));
    expectSignals(cue, from(512));
    expectSignals(tap, from(800));
  });

  test('in a file with gaps and a subsecond start, samples count from their own segment', async () => {
    const starts = [0.25, 1.25, 2.25, 3.25, 100.5, 101.5, 102.5];
    const recording = await recordingOf({
      events: [
        [2.25, 'cue'],
        [102, 'tap'],
      ],
      recordStartsS: starts,
    });
    const [cue, tap] = await readAll(samplePlan(), recording);
    const from = (sample: number) => [0, 1, 2].map((site) => expectedAt(site, sample - 20 - guard));
    expectSignals(cue, from(200));
    // The second segment begins with the fifth record, 400 samples on.
    expectSignals(tap, from(400 + 150));
  });

  test('the mean of the analysed sites is taken off each of them, and nothing of others', async () => {
    const recording = await recordingOf({ events: [[5, 'cue']] });
    const plan = samplePlan(epochWith({ reference: { kind: 'average' } }));
    const [epoch] = await readAll(plan, recording);
    const average = (_: number, i: number) => (valueAt(0, i) + valueAt(1, i) + valueAt(2, i)) / 3;
    expectSignals(
      epoch,
      [0, 1, 2].map((site) => expectedAt(site, 448, (s, i) => valueAt(s, i) - average(s, i))),
    );
  });

  test('named reference channels need not be analysed', async () => {
    const recording = await recordingOf({ events: [[5, 'cue']] });
    const plan = samplePlan(epochWith({ reference: { kind: 'channels', sites: ['Oz', 'F3'] } }));
    const [epoch] = await readAll(plan, recording);
    const mean = (i: number) => (valueAt(3, i) + valueAt(0, i)) / 2;
    expectSignals(
      epoch,
      [0, 1, 2].map((site) => expectedAt(site, 448, (s, i) => valueAt(s, i) - mean(i))),
    );
  });

  test('a straight line is taken off whole', async () => {
    const recording = await recordingOf({
      events: [[5, 'cue']],
      value: (site, sample) => 7 * site - 3 * sample,
    });
    const [epoch] = await readAll(samplePlan(epochWith({ detrend: 'line' })), recording);
    for (const signal of epoch) expect(Math.max(...signal.map(Math.abs))).toBeLessThan(1e-9);
  });

  test('each record of an epoch is read once for all sites', async () => {
    const recording = await recordingOf({ events: [[5, 'cue']] });
    const facts = [recording.facts, secondRecording()];
    const reads: [number, number][] = [];
    const counted: ByteSource = {
      size: recording.source.size,
      read(offset, length) {
        reads.push([offset, length]);
        return recording.source.read(offset, length);
      },
    };
    const plan = samplePlan();
    const reader = epochReader(plan, axesOf(plan, facts), [{ ...recording, source: counted }]);
    const [epoch] = planEpochs(plan, facts).epochs;
    await reader.read(epoch);
    const opening = reads.length;
    await reader.read(epoch);
    expect(reads.length - opening).toBe(1);
  });

  test('facts that do not fit the file are refused with the channel that differs', async () => {
    const recording = await recordingOf({ events: [[5, 'cue']] });
    const channels = recording.facts.channels.map((channel, i) =>
      i === 1 ? { ...channel, label: 'EEG C3' } : channel,
    );
    const changed = { ...recording, facts: { ...recording.facts, channels } };
    await expect(readAll(samplePlan(), changed)).rejects.toThrow(
      'channel 2 is "C3" in the file, but "EEG C3" in its facts',
    );
  });
});

describe('screenEpochs', () => {
  /** C3 is flat around 5 s, P4 has 300 uV at 8 s, and 300 uV in the guard only at 12 s. */
  const value = (site: number, sample: number) => {
    if (site === 1 && sample > 400 && sample < 700) return 3;
    if (site === 2 && (sample === 800 || sample === 1200 + 80 + 1)) return 300;
    return (sample * (site + 3)) % 17;
  };
  const events: [number, string][] = [
    [5, 'cue'],
    [8, 'cue'],
    [12, 'cue'],
    [15, 'tap'],
  ];
  const limits = (aboveUv: number | null, flatBelowUv: number | null) =>
    samplePlan(epochWith({ reject: { aboveUv, flatBelowUv, byHand: [] } }));

  async function screened(plan: Plan) {
    const recording = await recordingOf({ events, value });
    const facts = [recording.facts, secondRecording()];
    const { epochs } = planEpochs(plan, facts);
    return screenEpochs(plan, axesOf(plan, facts), [recording], epochs);
  }

  test('leaves out what is above or below a limit inside the window, naming site and value', async () => {
    const base = { condition: 'a', recording: shaOne, label: 'cue' };
    expect(await screened(limits(200, 0.5))).toEqual([
      { ...base, onsetS: 5, reason: 'flat', site: 'C3', valueUv: 0 },
      { ...base, onsetS: 8, reason: 'above-limit', site: 'P4', valueUv: 300 },
    ]);
  });

  test('a flat site without a limit for flat epochs is named before its phases are asked for', async () => {
    await expect(screened(limits(200, null))).rejects.toThrow('C3 is flat in the epoch at 5 s');
  });

  test('a value on the limit stays', async () => {
    const lost = await screened(limits(300, 0.5));
    expect(lost.map((epoch) => epoch.reason)).toEqual(['flat']);
  });

  test('without limits nothing is left out', async () => {
    expect(await screened(limits(null, null))).toEqual([]);
  });
});
