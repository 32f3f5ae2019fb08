import type { ArrayPlan, Arrays } from '../../kernels/kernels';
import type { RunInput } from './model';

/** Vectors of the last group may be read past the end. */
const slack = 8;

/**
 * Copies of two sites' phasors beside the kernels' other arrays. Neighbouring pairs share their
 * first site, so most pairs copy one.
 */
export function siteSlots(run: RunInput) {
  const { layout, phasors } = run;
  const length = layout.epochCount * 2 * layout.samplesPerEpoch;
  const arrays = {
    slotA: ['f32', length + slack],
    slotB: ['f32', length + slack],
  } as const satisfies ArrayPlan;
  let held: [number, number] = [-1, -1];

  function copy(site: number, into: Float32Array) {
    into.set(phasors.subarray(site * length, (site + 1) * length));
  }

  return {
    arrays,
    none: (given: Arrays<typeof arrays>) => ({ j: given.slotA, k: given.slotB }),
    hold(given: Arrays<typeof arrays>, j: number, k: number) {
      if (held[0] !== j) copy(j, given.slotA);
      if (held[1] !== k) copy(k, given.slotB);
      held = [j, k];
      return { j: given.slotA, k: given.slotB };
    },
  };
}
