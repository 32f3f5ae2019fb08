import { sumCrossTerms, sumShiftedCrossTerms } from '../kernels/cross-sums';
import type { Measure, ShiftedRows } from './measure/measure';
import type { RunInput } from './null/model';

/** One condition of one pair as it was recorded, by feature. */
export interface Observed {
  /** The measure, f64. */
  value: Float64Array;
  /** Preferred lag arg m, radians in -pi .. pi. */
  lagRad: Float64Array;
}

/** Writes the observed measure and lag of pairs, one after the other; owns its scratch. */
export interface Observer {
  observe(j: number, k: number, condition: 'a' | 'b', out: Observed): void;
}

/** An observer of a run's pairs. Cost of a condition: one permutation's. */
export function observer(run: RunInput): Observer {
  const { measure, layout, featureCount } = run;
  const { epochsA, epochsB } = run.shape;
  const starts = new Int32Array(Math.max(epochsA, epochsB));
  const partnerStarts = new Int32Array(starts.length);
  const sums = new Float64Array(featureCount * measure.termCount);
  const cross = new Float64Array(featureCount * 2);
  return {
    observe(j, k, condition, out) {
      const from = condition === 'a' ? 0 : epochsA;
      const epochs = condition === 'a' ? epochsA : epochsB;
      const stride = 2 * layout.samplesPerEpoch;
      for (let n = 0; n < epochs; n++) {
        starts[n] = (j * layout.epochCount + from + n) * stride;
        partnerStarts[n] = (k * layout.epochCount + from + n) * stride;
      }
      const rows = unshifted(run, epochs);
      sumUnshifted(run, measure, starts, partnerStarts, sums, rows);
      measure.values(sums, epochs, out.value, featureCount);
      sumUnshifted(run, crossTerms, starts, partnerStarts, cross, rows);
      for (let x = 0; x < featureCount; x++) {
        out.lagRad[x] = Math.atan2(cross[2 * x + 1], cross[2 * x]);
      }
    },
  };
}

const crossTerms = { sumTerms: sumCrossTerms, sumShiftedTerms: sumShiftedCrossTerms };

/** Whole windows are read at the plan's times, so a shift of zero; others hold those times only. */
function sumUnshifted(
  run: RunInput,
  terms: Pick<Measure, 'sumTerms' | 'sumShiftedTerms'>,
  jStarts: Int32Array,
  kStarts: Int32Array,
  sums: Float64Array,
  rows: ShiftedRows,
): void {
  const sum =
    run.layout.samplesPerEpoch === run.featureCount ? terms.sumTerms : terms.sumShiftedTerms;
  sum(run.phasors, jStarts, kStarts, sums, rows);
}

function unshifted(run: RunInput, epochCount: number): ShiftedRows {
  const { layout } = run;
  const shifts = new Uint16Array(epochCount);
  const times = layout.keptSamples.length;
  return {
    epochCount,
    samplesPerEpoch: layout.samplesPerEpoch,
    frequencyCount: layout.frequencyCount,
    samplesPerFrequency: layout.samplesPerFrequency,
    keptSamples: layout.keptSamples,
    jShifts: shifts,
    kShifts: shifts,
    jSamples: new Int32Array(times),
    kSamples: new Int32Array(times),
  };
}
