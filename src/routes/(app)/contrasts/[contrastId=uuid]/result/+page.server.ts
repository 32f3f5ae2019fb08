import { allow } from '$lib/server/access';
import { db } from '$lib/server/database';
import { contrastStage, finishedRuns, loadResult } from '$lib/server/results';
import { storage } from '$lib/server/storage';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
  const member = allow(event, 'result.read');
  const { contrastId } = event.params;
  const [stage, runs] = await Promise.all([
    contrastStage(db, member, contrastId),
    finishedRuns(db, member, contrastId),
  ]);
  const query = event.url.searchParams;
  const wantedPlan = Number(query.get('plan')) || null;
  const ofPlan = wantedPlan ? runs.filter((run) => run.planVersion === wantedPlan) : runs;
  const shown = ofPlan.find((run) => run.id === query.get('run')) ?? ofPlan[0];
  const result = shown
    ? await loadResult(db, storage, member, shown.id, query.get('correction'))
    : null;
  return {
    meta: { title: `${stage.name}, result` },
    question: result?.plan.body.question,
    contrastId,
    stage,
    runs: ofPlan,
    result,
  };
};
