import type { Plan } from '../plan';
import type { Axes } from '../types';
import { layoutOf } from './phases';

/** Steps of a full turn: a byte keeps a phase to 0.7 degrees, enough for a rose of differences. */
export const bytesToTheTurn = 256;

/**
 * Phase angles at the plan's times as bytes, [site][epoch][frequency][time]; byte b stands for
 * b / 256 of a turn. For figures only: no statistic is computed from them.
 * @throws RangeError when the buffer does not fit the plan.
 */
export function phaseBytes(
  plan: Plan,
  axes: Axes,
  phases: { buffer: ArrayBufferLike; epochsA: number; epochsB: number },
): Uint8Array<ArrayBuffer> {
  const layout = layoutOf(plan, axes, phases.epochsA + phases.epochsB);
  if (phases.buffer.byteLength !== layout.byteLength) {
    throw new RangeError(
      `phaseBytes: a buffer of ${phases.buffer.byteLength} bytes where the plan needs ${layout.byteLength}`,
    );
  }
  const { keptSamples, samplesPerEpoch, samplesPerFrequency, frequencyCount } = layout;
  const phasors = new Float32Array(phases.buffer);
  const rows = layout.siteCount * layout.epochCount;
  const out = new Uint8Array(rows * frequencyCount * keptSamples.length);
  let at = 0;
  for (let row = 0; row < rows; row++) {
    for (let f = 0; f < frequencyCount; f++) {
      const base = row * 2 * samplesPerEpoch + f * samplesPerFrequency;
      for (const kept of keptSamples) {
        const real = phasors[base + kept];
        const imaginary = phasors[base + kept + samplesPerEpoch];
        const turn = Math.atan2(imaginary, real) / (2 * Math.PI);
        out[at++] = Math.round(turn * bytesToTheTurn) & (bytesToTheTurn - 1);
      }
    }
  }
  return out;
}
