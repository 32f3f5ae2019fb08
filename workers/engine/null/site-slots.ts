import type { ArrayPlan, Arrays } from '../../kernels/kernels';
import type { HeldPair, RunInput } from './model';

/** Vectors of the last group may be read past the end. */
const slack = 8;

/**
 * Copies of two sites' phasors beside the kernels' other arrays. Neighbouring pairs share their
 * first site, so most pairs copy one.
 */
export class SiteSlots {
  private held: [number, number] = [-1, -1];

  constructor(
    private readonly run: RunInput,
    private readonly slots: Arrays<ReturnType<typeof SiteSlots.plan>>,
  ) {}

  static plan(run: RunInput) {
    const length = siteLength(run) + slack;
    return { slotJ: ['f32', length], slotK: ['f32', length] } as const satisfies ArrayPlan;
  }

  hold(j: number, k: number): HeldPair {
    const { slotJ, slotK } = this.slots;
    if (this.held[0] !== j) this.copy(j, slotJ);
    if (this.held[1] !== k) this.copy(k, slotK);
    this.held = [j, k];
    return { j, k, phasorsJ: slotJ, phasorsK: slotK };
  }

  private copy(site: number, slot: Float32Array): void {
    const length = siteLength(this.run);
    slot.set(this.run.phasors.subarray(site * length, (site + 1) * length));
  }
}

function siteLength({ layout }: RunInput): number {
  return layout.epochCount * 2 * layout.samplesPerEpoch;
}
