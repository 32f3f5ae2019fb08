import { planEpochs, PlanError, type Condition, type LostEpoch, type Plan } from '$engine';
import { formatNumber } from '$lib/model/format';
import type { StudyRecording } from '$lib/model/study-recording';
import { reasonName } from '../side/facts';

export interface EpochRow {
  key: string;
  condition: Condition;
  recording: string;
  /** File name. */
  name: string;
  onsetS: number;
  label: string;
  /** Why it is left out; null when it is kept. */
  lostBy: string | null;
  byHand: boolean;
}

/** "above 150 µV: 312 µV at O1" */
function words(plan: Plan, { reason, site, valueUv }: LostEpoch): string {
  const name = reasonName(reason, plan.epoch.reject);
  return site && valueUv !== undefined
    ? `${name}: ${formatNumber(valueUv, valueUv < 10 ? 1 : 0)} µV at ${site}`
    : name;
}

/**
 * Every moment that the rules take, in the order of recordings and time, with what becomes of it.
 * `amplitude` are the epochs that the limits in µV leave out, once they are known.
 */
export function epochRows(
  plan: Plan,
  recordings: readonly StudyRecording[],
  amplitude: readonly LostEpoch[] | null,
): EpochRow[] {
  const nameOf = new Map(plan.recordings.map((each) => [each.sha256, each.name]));
  const rank = new Map(plan.recordings.map((each, i) => [each.sha256, i]));
  const keyOf = (each: { condition: Condition; recording: string; onsetS: number }) =>
    `${each.condition}/${each.recording}/${each.onsetS}`;
  const broken = new Map((amplitude ?? []).map((each) => [keyOf(each), each]));
  try {
    const { epochs, lost } = planEpochs(plan, [...recordings]);
    const gone = new Map(lost.map((each) => [keyOf(each), each]));
    return [...epochs, ...lost]
      .map((each) => {
        const key = keyOf(each);
        const why = gone.get(key) ?? broken.get(key);
        return {
          key,
          condition: each.condition,
          recording: each.recording,
          name: nameOf.get(each.recording) ?? '',
          onsetS: each.onsetS,
          label: each.label,
          lostBy: why ? words(plan, why) : null,
          byHand: why?.reason === 'by-hand',
        };
      })
      .sort((x, y) => rank.get(x.recording)! - rank.get(y.recording)! || x.onsetS - y.onsetS);
  } catch (error) {
    if (error instanceof PlanError) return [];
    throw error;
  }
}
