import type { Epoch, LostEpoch } from '../types';

/** The planned epochs without those that their samples ruled out, in the same order. */
export function withoutLost(planned: Epoch[], screened: LostEpoch[]): Epoch[] {
  const gone = new Set(screened.map(epochKey));
  return planned.filter((epoch) => !gone.has(epochKey(epoch)));
}

/** What names an epoch of a plan: `planEpochs` makes one epoch of a moment in a condition. */
export function epochKey({
  condition,
  recording,
  onsetS,
}: Pick<Epoch, 'condition' | 'recording' | 'onsetS'>): string {
  return `${condition}/${recording}/${onsetS}`;
}
