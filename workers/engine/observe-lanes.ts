import { groupCount, groupFeatures, groupLanes } from '../kernels/group';
import type { Arrays, ArrayPlan, Kernels } from '../kernels/kernels';
import type { HeldPair, RunInput } from './null/model';
import type { Observed, Observer } from './observe';

/** Arrays of the observer below. */
export function observerArrays({ layout }: RunInput) {
  return {
    observedTerms: ['f32', layout.epochCount * groupLanes],
    observedSums: ['f64', groupLanes],
  } as const satisfies ArrayPlan;
}

/** An observer of resultant lengths by the kernels; terms in f32, sums in f64. */
export class LaneObserver implements Observer {
  constructor(
    private readonly run: RunInput,
    private readonly kernels: Kernels,
    private readonly arrays: Arrays<ReturnType<typeof observerArrays>>,
  ) {}

  observe(pair: HeldPair, a: Observed, b: Observed): void {
    const { run, kernels, arrays } = this;
    const { epochCount, samplesPerEpoch } = run.layout;
    const { epochsA } = run.shape;
    const { observedTerms: terms, observedSums: sums } = arrays;
    for (let group = 0; group < groupCount(run.featureCount); group++) {
      const first = group * groupFeatures;
      const count = Math.min(groupFeatures, run.featureCount - first);
      const shape = { epochCount, samplesPerEpoch, first, count };
      kernels.crossLanes(pair.phasorsJ, pair.phasorsK, terms, shape);
      kernels.sumLanes(terms, sums, { from: 0, to: epochsA });
      store(sums, epochsA, a, first, count);
      kernels.sumLanes(terms, sums, { from: epochsA, to: epochCount });
      store(sums, epochCount - epochsA, b, first, count);
    }
  }
}

function store(
  sums: Float64Array,
  epochs: number,
  out: Observed,
  first: number,
  count: number,
): void {
  for (let x = 0; x < count; x++) {
    const re = sums[x];
    const im = sums[groupFeatures + x];
    // Rounding may carry equal phases a last bit above 1.
    out.value[first + x] = Math.min(1, Math.sqrt(re * re + im * im) / epochs);
    out.lagRad[first + x] = Math.atan2(im, re);
  }
}
