import { sql } from 'kysely';
import type { Db, RunState } from '../database';

export type Stage = 'define' | 'run' | 'result';

export interface ListedContrast {
  id: string;
  name: string;
  question: string;
  stage: Stage;
  /** Where it stands, for people: "plan 2, draft". */
  state: string;
  lastAct: { personName: string; action: string; at: Date };
  /** Of the newest finished run, under the correction that carries the claim; null without one. */
  headline: { planVersion: number; edgeCount: number; smallestAdjustedP: number | null } | null;
}

/** A study's contrasts with what a person wants to know before opening one. */
export async function studyContrasts(
  db: Db,
  teamId: string,
  studyId: string,
): Promise<ListedContrast[]> {
  const contrasts = await db
    .selectFrom('contrast')
    .innerJoin('person', 'person.id', 'contrast.createdBy')
    .select(['contrast.id', 'contrast.name', 'contrast.createdAt', 'person.name as creator'])
    .where('contrast.teamId', '=', teamId)
    .where('contrast.studyId', '=', studyId)
    .orderBy('contrast.createdAt')
    .execute();
  if (contrasts.length === 0) return [];
  const ids = contrasts.map((contrast) => contrast.id);
  const plans = await plansOf(db, teamId, ids);
  const runs = await runsOf(
    db,
    teamId,
    plans.map((plan) => plan.id),
  );
  const [headlines, acts] = await Promise.all([
    headlinesOf(db, teamId, runs),
    lastActs(db, teamId, [...ids, ...plans.map((plan) => plan.id), ...runs.map((run) => run.id)]),
  ]);
  return contrasts.map(({ id, name, createdAt, creator }) => {
    const ownPlans = plans.filter((plan) => plan.contrastId === id);
    const planIds = new Set(ownPlans.map((plan) => plan.id));
    const ownRuns = runs.filter((run) => planIds.has(run.planId));
    const subjects = [id, ...planIds, ...ownRuns.map((run) => run.id)];
    const created = { personName: creator, action: 'contrast.created', at: createdAt };
    const finished = ownRuns.find((run) => run.state === 'finished');
    return {
      id,
      name,
      question: ownPlans[0]?.question ?? '',
      ...standing(ownPlans[0], ownRuns),
      lastAct: latest(subjects.flatMap((subject) => acts.get(subject) ?? [])) ?? created,
      headline: finished ? (headlines.get(finished.id) ?? null) : null,
    };
  });
}

type PlanRow = Awaited<ReturnType<typeof plansOf>>[number];
type RunRow = Awaited<ReturnType<typeof runsOf>>[number];

/** Newest version first. */
function plansOf(db: Db, teamId: string, contrastIds: string[]) {
  return db
    .selectFrom('plan')
    .select(['id', 'contrastId', 'version', 'lockedAt'])
    .select(sql<string>`coalesce(body ->> 'question', '')`.as('question'))
    .where('teamId', '=', teamId)
    .where('contrastId', 'in', contrastIds)
    .orderBy('version', 'desc')
    .execute();
}

/** Newest first, with the plan's first correction. */
async function runsOf(db: Db, teamId: string, planIds: string[]) {
  if (planIds.length === 0) return [];
  return db
    .selectFrom('run')
    .innerJoin('plan', 'plan.id', 'run.planId')
    .select(['run.id', 'run.planId', 'run.state', 'run.progress', 'plan.version'])
    .select(sql<string>`plan.body #>> '{test,corrections,0}'`.as('correction'))
    .where('run.teamId', '=', teamId)
    .where('run.planId', 'in', planIds)
    .orderBy('run.startedAt', 'desc')
    .execute();
}

const runWords: Record<Exclude<RunState, 'finished'>, string> = {
  running: 'running',
  paused: 'paused',
  stopped: 'stopped',
  failed: 'failed',
};

function standing(plan: PlanRow | undefined, runs: RunRow[]): { stage: Stage; state: string } {
  if (!plan) return { stage: 'define', state: 'no plan yet' };
  const label = `plan ${plan.version}`;
  if (plan.lockedAt === null) return { stage: 'define', state: `${label}, draft` };
  const ofPlan = runs.filter((run) => run.planId === plan.id);
  if (ofPlan.some((run) => run.state === 'finished')) {
    return { stage: 'result', state: `${label}, run` };
  }
  const run = ofPlan[0];
  if (!run || run.state === 'finished') return { stage: 'run', state: `${label}, locked` };
  const percent = Math.floor(run.progress * 100);
  return { stage: 'run', state: `${label}, ${runWords[run.state]} at ${percent} %` };
}

async function headlinesOf(db: Db, teamId: string, runs: RunRow[]) {
  const finished = runs.filter((run) => run.state === 'finished');
  if (finished.length === 0) return new Map<string, NonNullable<ListedContrast['headline']>>();
  const rows = await db
    .selectFrom('edge')
    .select(['runId', 'correction'])
    .select([
      sql<number>`count(*)`.as('edgeCount'),
      sql<number>`min(adjusted_p)`.as('smallestAdjustedP'),
    ])
    .where('teamId', '=', teamId)
    .where(
      'runId',
      'in',
      finished.map((run) => run.id),
    )
    .groupBy(['runId', 'correction'])
    .execute();
  return new Map(
    finished.map((run) => {
      const row = rows.find((one) => one.runId === run.id && one.correction === run.correction);
      return [
        run.id,
        {
          planVersion: run.version,
          edgeCount: row?.edgeCount ?? 0,
          smallestAdjustedP: row?.smallestAdjustedP ?? null,
        },
      ];
    }),
  );
}

/** The newest act on each subject, from the team's record of actions. */
async function lastActs(db: Db, teamId: string, subjectIds: string[]) {
  const rows = await db
    .selectFrom('auditEvent')
    .innerJoin('person', 'person.id', 'auditEvent.personId')
    .distinctOn('auditEvent.subjectId')
    .select([
      'auditEvent.subjectId',
      'auditEvent.action',
      'auditEvent.createdAt as at',
      'person.name as personName',
    ])
    .where('auditEvent.teamId', '=', teamId)
    .where('auditEvent.subjectType', 'in', ['contrast', 'plan', 'run'])
    .where('auditEvent.subjectId', 'in', subjectIds)
    .orderBy('auditEvent.subjectId')
    .orderBy('auditEvent.createdAt', 'desc')
    .orderBy('auditEvent.id', 'desc')
    .execute();
  return new Map(rows.map(({ subjectId, ...act }) => [subjectId, act]));
}

function latest(acts: ListedContrast['lastAct'][]): ListedContrast['lastAct'] | undefined {
  return acts.sort((first, second) => second.at.getTime() - first.at.getTime())[0];
}
