import type { Measure } from '../../../workers/engine';

export type Complex = [number, number];

/** A measure's value of a group of epochs, from z of both sites in each epoch. */
export function valueOf(measure: Measure, epochs: { j: Complex; k: Complex }[]): number {
  const n = epochs.length;
  const phasors = Float32Array.from([
    ...epochs.flatMap(({ j }) => j),
    ...epochs.flatMap(({ k }) => k),
  ]);
  const starts = Int32Array.from({ length: n }, (_, i) => 2 * i);
  const partner = starts.map((start) => start + 2 * n);
  const sums = new Float64Array(measure.termCount);
  const values = new Float64Array(1);
  measure.sumTerms(phasors, starts, partner, sums, {
    epochCount: n,
    sampleCount: 1,
    partDistance: 1,
  });
  measure.values(sums, n, values, 1);
  return values[0];
}

export const unit = (rad: number): Complex => [Math.cos(rad), Math.sin(rad)];

/** Unit phasors whose differences are given in degrees; each epoch has a phase of its own. */
export function lagged(differencesDeg: number[]): { j: Complex; k: Complex }[] {
  return differencesDeg.map((deg, i) => ({
    j: unit((deg * Math.PI) / 180 + 0.7 * i),
    k: unit(0.7 * i),
  }));
}
