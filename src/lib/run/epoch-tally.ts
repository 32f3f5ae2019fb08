import type { Condition, Epoch, LostEpoch } from '$engine';

/** Epochs kept and lost by condition, as the page and the stored run state them. */
export interface EpochTally {
  plannedA: number;
  plannedB: number;
  keptA: number;
  keptB: number;
  lost: LostEpoch[];
}

/** Counts by condition; every moment of the rules is either kept or lost. */
export function tallyOf(kept: Epoch[], lost: LostEpoch[]): EpochTally {
  const count = (list: { condition: Condition }[], condition: Condition): number =>
    list.filter((epoch) => epoch.condition === condition).length;
  const [keptA, keptB] = [count(kept, 'a'), count(kept, 'b')];
  return {
    plannedA: keptA + count(lost, 'a'),
    plannedB: keptB + count(lost, 'b'),
    keptA,
    keptB,
    lost,
  };
}
