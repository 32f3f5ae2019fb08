import { planEpochs, PlanError, withoutLost, type LostEpoch, type Plan } from '$engine';
import type { StudyRecording } from '$lib/model/study-recording';

/** The epochs left after the limits in µV, once `lost` is known; null before, or for no fitting plan. */
export function screenedEpochs(
  plan: Plan,
  recordings: readonly StudyRecording[],
  lost: LostEpoch[] | null,
): ReturnType<typeof planEpochs> | null {
  if (lost === null) return null;
  try {
    const planned = planEpochs(plan, [...recordings]);
    return { epochs: withoutLost(planned.epochs, lost), lost: [...planned.lost, ...lost] };
  } catch (error) {
    if (error instanceof PlanError) return null;
    throw error;
  }
}
