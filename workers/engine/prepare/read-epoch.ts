import type { Plan } from '../plan';
import { guardSamples } from '../phase/guard';
import { openEdf, type EdfFile } from '../read/edf';
import type { EdfSignal } from '../read/edf-signals';
import type { ByteSource } from '../read/byte-source';
import type { Axes, Epoch, RecordingFacts } from '../types';
import { windowSamples } from './grid';
import { applyLaplacian, laplacianMatrix, sitePoints } from './laplacian';
import { channelIndices, recordingOf, sitesRead } from './recordings';
import { detrend, rereference } from './signal';

/** A recording's facts with its bytes. */
export interface RecordingSource {
  facts: RecordingFacts;
  source: ByteSource;
}

interface OpenRecording {
  /** Of the surface Laplacian, where the plan asks for it. */
  laplacian: Float64Array | null;
  name: string;
  file: EdfFile;
  signals: EdfSignal[];
}

/** Reads prepared epochs of one plan, opening each recording once. */
export interface EpochReader {
  guard: number;
  /** Samples of the window without its guards. */
  windowCount: number;
  /**
   * The samples of an epoch, [site][guard + window + guard], microvolts, referenced and detrended
   * as the plan says (numerics, section 1). Each record is read once for all sites.
   * @throws EdfError or RangeError when the file does not hold what its facts say.
   */
  read(epoch: Epoch): Promise<Float64Array[]>;
  /** The epoch's place in words, for errors. */
  describe(epoch: Epoch): string;
}

export function epochReader(plan: Plan, axes: Axes, recordings: RecordingSource[]): EpochReader {
  const rate = axes.samplingRateHz;
  const guard = guardSamples(plan.phase, axes.frequenciesHz, rate);
  const { first, count } = windowSamples(plan, rate);
  const opened = new Map<string, Promise<OpenRecording>>();
  const facts = recordings.map((recording) => recording.facts);

  function open(sha256: string): Promise<OpenRecording> {
    const found = opened.get(sha256) ?? openRecording(plan, recordings, sha256);
    opened.set(sha256, found);
    return found;
  }

  return {
    guard,
    windowCount: count,
    async read(epoch) {
      const { name, file, signals, laplacian } = await open(epoch.recording);
      const segment = file.segments[epoch.segment];
      if (!segment) {
        throw new RangeError(`${name} has no segment ${epoch.segment + 1}: read its facts again.`);
      }
      const start = epoch.sample + first - guard;
      const samples = await file.readSignals(signals, segment, start, count + 2 * guard);
      return prepared(plan, samples, laplacian);
    },
    describe: (epoch) =>
      `the epoch at ${Number(epoch.onsetS.toFixed(3))} s of ${recordingOf(plan, facts, epoch.recording).name}`,
  };
}

async function openRecording(
  plan: Plan,
  recordings: RecordingSource[],
  sha256: string,
): Promise<OpenRecording> {
  const facts = recordingOf(
    plan,
    recordings.map((recording) => recording.facts),
    sha256,
  );
  const { source } = recordings.find((recording) => recording.facts.sha256 === sha256)!;
  const file = await openEdf(source);
  const indices = channelIndices(facts, sitesRead(plan), 'sites');
  const signals = Array.from(indices, (i) => {
    const signal = file.channels[i];
    if (signal?.label !== facts.channels[i].label) {
      throw new RangeError(
        `${facts.name}: channel ${i + 1} is "${signal?.label ?? 'absent'}" in the file, but "${facts.channels[i].label}" in its facts. Read its facts again.`,
      );
    }
    return signal;
  });
  const laplacian =
    plan.epoch.reference.kind === 'laplacian' ? laplacianMatrix(sitePoints(plan, facts)) : null;
  return { name: facts.name, file, signals, laplacian };
}

/** References and detrends the samples of `sitesRead`, and returns those of the analysed sites. */
function prepared(
  plan: Plan,
  samples: Float64Array[],
  laplacian: Float64Array | null,
): Float64Array[] {
  const { reference } = plan.epoch;
  const recorded = samples.slice(0, plan.sites.length);
  const analysed = laplacian ? applyLaplacian(recorded, laplacian) : recorded;
  if (reference.kind === 'average') rereference(analysed, analysed);
  if (reference.kind === 'channels') {
    const read = sitesRead(plan);
    const parts = [...new Set(reference.sites)].map((site) => samples[read.indexOf(site)]);
    rereference(analysed, parts);
  }
  for (const signal of analysed) detrend(signal, plan.epoch.detrend);
  return analysed;
}
