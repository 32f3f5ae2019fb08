import type { CorrectionId } from '$engine';
import { edgesSidecar } from '$lib/model/edge-table';
import type { FoundRun } from './find-run';

/** The sidecar of a run's exported edges, with what only the database knows of the plan. */
export function edgesJson(found: FoundRun, correction: CorrectionId, edgeCount: number): object {
  const { run, plan, contrast } = found;
  return {
    Contrast: contrast.name,
    Simulated: contrast.simulated,
    PlanVersion: plan.version,
    PlanLockedAt: plan.lockedAt.toISOString(),
    ReasonForChange: plan.reason,
    ...edgesSidecar({ ...run, plan: plan.body, planHash: plan.hash }, correction, edgeCount),
  };
}
