import type { Plan } from '../plan';
import { epochReader, type RecordingSource } from '../prepare/read-epoch';
import type { Axes, Epoch } from '../types';
import { phaseJob, phasesOfEpoch } from './phases';

/**
 * Reads epochs `range.from .. range.to - 1` of the kept `epochs` (A before B) and writes their
 * unit phasors into `buffer`, laid out as phase/layout.ts says; touches nothing else of it, so any
 * worker may write any range.
 * @throws RangeError when the range or the buffer does not fit, or a signal has no phase; EdfError.
 */
export async function writePhases(
  plan: Plan,
  axes: Axes,
  recordings: RecordingSource[],
  epochs: Epoch[],
  range: { from: number; to: number },
  buffer: ArrayBufferLike,
): Promise<void> {
  const { from, to } = range;
  if (!(from >= 0 && from <= to && to <= epochs.length)) {
    throw new RangeError(
      `writePhases: range ${from} to ${to} leaves the ${epochs.length} kept epochs`,
    );
  }
  const reader = epochReader(plan, axes, recordings);
  const job = phaseJob(plan, axes, epochs.length);
  if (buffer.byteLength !== job.layout.byteLength) {
    throw new RangeError(
      `writePhases: a buffer of ${buffer.byteLength} bytes where the plan needs ${job.layout.byteLength}`,
    );
  }
  const phasors = new Float32Array(buffer);
  for (let i = from; i < to; i++) {
    const samples = await reader.read(epochs[i]);
    phasesOfEpoch(job, samples, i, phasors, reader.describe(epochs[i]));
  }
}
