import type { Condition, Epoch, LostEpoch } from '$engine';

/** Epochs kept and lost by condition, as the page and the stored run state them. */
export interface EpochTally {
  plannedA: number;
  plannedB: number;
  keptA: number;
  keptB: number;
  lost: LostEpoch[];
}

/** The planned epochs without those that their samples ruled out, in the same order. */
export function withoutLost(planned: Epoch[], screened: LostEpoch[]): Epoch[] {
  const gone = new Set(screened.map(keyOf));
  return planned.filter((epoch) => !gone.has(keyOf(epoch)));
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

const keyOf = ({ condition, recording, onsetS }: Epoch | LostEpoch): string =>
  `${condition}/${recording}/${onsetS}`;
