import { sumCrossTerms } from '../kernels/cross-sums';
import type { HeldPair, RunInput } from './null/model';

/** One condition of one pair as it was recorded, by feature. */
export interface Observed {
  /** The measure, f64. */
  value: Float64Array;
  /** Preferred lag arg m, radians in -pi .. pi. */
  lagRad: Float64Array;
}

/** Writes the observed measure and lag of pairs, one after the other; owns its scratch. */
export interface Observer {
  observe(pair: HeldPair, a: Observed, b: Observed): void;
}

export function newObserved(featureCount: number): Observed {
  return { value: new Float64Array(featureCount), lagRad: new Float64Array(featureCount) };
}

/** An observer of any measure, in f64. Cost: about one permutation's. */
export class MeasureObserver implements Observer {
  private readonly starts: Int32Array;
  private readonly partnerStarts: Int32Array;
  private readonly phasors: Float32Array;
  private readonly sums: Float64Array;
  private readonly cross: Float64Array;

  constructor(private readonly run: RunInput) {
    const { measure, shape, featureCount } = run;
    const most = Math.max(shape.epochsA, shape.epochsB);
    this.starts = Int32Array.from({ length: most }, (_, n) => n * 2 * featureCount);
    this.partnerStarts = this.starts.map((start) => most * 2 * featureCount + start);
    this.phasors = new Float32Array(2 * most * 2 * featureCount);
    this.sums = new Float64Array(featureCount * measure.termCount);
    this.cross = new Float64Array(featureCount * 2);
  }

  observe({ j, k }: HeldPair, a: Observed, b: Observed): void {
    const { epochsA, epochsB } = this.run.shape;
    this.condition(j, k, 0, epochsA, a);
    this.condition(j, k, epochsA, epochsB, b);
  }

  private condition(j: number, k: number, from: number, epochCount: number, out: Observed): void {
    const { run, phasors, starts, partnerStarts, sums, cross } = this;
    const { measure, featureCount } = run;
    for (let n = 0; n < epochCount; n++) {
      copyKept(run, j, from + n, phasors, starts[n]);
      copyKept(run, k, from + n, phasors, partnerStarts[n]);
    }
    const rows = { epochCount, sampleCount: featureCount, partDistance: featureCount };
    measure.sumTerms(phasors, starts, partnerStarts, sums, rows);
    measure.values(sums, epochCount, out.value, featureCount);
    if (measure.needsAmplitude) toUnitLength(phasors, featureCount);
    sumCrossTerms(phasors, starts, partnerStarts, cross, rows);
    for (let x = 0; x < featureCount; x++) {
      out.lagRad[x] = Math.atan2(cross[2 * x + 1], cross[2 * x]);
    }
  }
}

/** Copies one epoch of one site at the plan's times: `[part][frequency][time]`. */
function copyKept(
  run: RunInput,
  site: number,
  epoch: number,
  out: Float32Array,
  start: number,
): void {
  const { layout, phasors } = run;
  const { keptSamples, samplesPerFrequency } = layout;
  const from = (site * layout.epochCount + epoch) * 2 * layout.samplesPerEpoch;
  let at = start;
  for (let row = 0; row < 2 * layout.frequencyCount; row++) {
    const first = from + row * samplesPerFrequency;
    for (const sample of keptSamples) out[at++] = phasors[first + sample];
  }
}

/** The preferred lag is that of the mean unit vector, whatever the measure weights by. */
function toUnitLength(phasors: Float32Array, featureCount: number): void {
  for (let row = 0; row < phasors.length; row += 2 * featureCount) {
    for (let at = row; at < row + featureCount; at++) {
      const size = Math.hypot(phasors[at], phasors[at + featureCount]);
      if (size === 0) continue;
      phasors[at] /= size;
      phasors[at + featureCount] /= size;
    }
  }
}
