import { allow, may } from '$lib/server/access';
import { db } from '$lib/server/database';
import { runPage } from '$lib/server/runs';

export async function load(event) {
  const member = allow(event, 'contrast.read');
  event.depends('nullwright:run');
  const { contrast, askedVersion } = await event.parent();
  const shown = await runPage(db, member.teamId, contrast.id, {
    version: askedVersion,
    mayRun: may(member.role, 'run.write'),
  });
  return {
    meta: { title: `Run, ${contrast.name}` },
    question: shown?.plan.question,
    personId: member.personId,
    shown,
  };
}
