import { error } from '@sveltejs/kit';
import { axesOf, planEpochs } from '$engine';
import type { Axes, Epoch, LostEpoch, Plan, RecordingFacts } from '$engine';
import { readLockedBody } from '../contrasts/plan-body';
import type { Db } from '../database';
import { recordingFacts } from '../recordings';

export interface LockedPlan {
  id: string;
  version: number;
  hash: string;
  lockedAt: Date;
  studyId: string;
  plan: Plan;
}

/** What a plan asks for, from the database's own facts: a result is measured against this. */
export interface Expectation {
  facts: RecordingFacts[];
  axes: Axes;
  /** Epochs that the metadata allow; the samples may rule out more. */
  planned: Epoch[];
  lost: LostEpoch[];
}

const lockedPlans = (db: Db, teamId: string) =>
  db
    .selectFrom('plan')
    .innerJoin('contrast', 'contrast.id', 'plan.contrastId')
    .select(['plan.id', 'plan.version', 'plan.hash', 'plan.lockedAt', 'plan.body'])
    .select('contrast.studyId')
    .where('plan.teamId', '=', teamId)
    .where('plan.lockedAt', 'is not', null);

type PlanRow = Awaited<ReturnType<ReturnType<typeof lockedPlans>['execute']>>[number];

function asLockedPlan({ body, hash, lockedAt, ...row }: PlanRow): LockedPlan {
  if (hash === null || lockedAt === null) throw new Error(`plan ${row.id} is not locked`);
  return { ...row, hash, lockedAt, plan: readLockedBody(body) };
}

/** One locked version of a contrast's plan, or with null the newest; null where there is none. */
export async function lockedPlan(
  db: Db,
  teamId: string,
  contrastId: string,
  version: number | null = null,
): Promise<LockedPlan | null> {
  const rows = lockedPlans(db, teamId).where('plan.contrastId', '=', contrastId);
  const row = await (version === null ? rows : rows.where('plan.version', '=', version))
    .orderBy('plan.version', 'desc')
    .limit(1)
    .executeTakeFirst();
  return row ? asLockedPlan(row) : null;
}

export async function planById(db: Db, teamId: string, planId: string): Promise<LockedPlan> {
  const row = await lockedPlans(db, teamId).where('plan.id', '=', planId).executeTakeFirstOrThrow();
  return asLockedPlan(row);
}

/** Throws 409 where a recording of the plan is gone: nothing can be computed or checked then. */
export async function expectationOf(
  db: Db,
  teamId: string,
  { plan, studyId }: LockedPlan,
): Promise<Expectation> {
  const sha256s = plan.recordings.map((recording) => recording.sha256);
  const facts = await recordingFacts(db, teamId, { studyId, sha256s });
  const gone = plan.recordings.filter(({ sha256 }) => !facts.some((f) => f.sha256 === sha256));
  if (gone.length > 0) {
    const names = gone.map(({ name }) => name).join(', ');
    error(409, {
      code: 'recording-missing',
      message: `The plan names ${names}, which the study no longer holds. Upload it again.`,
    });
  }
  const { epochs, lost } = planEpochs(plan, facts);
  return { facts, axes: axesOf(plan, facts), planned: epochs, lost };
}
