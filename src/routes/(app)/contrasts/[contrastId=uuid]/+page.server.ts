import { redirect } from '@sveltejs/kit';
import { allow } from '$lib/server/access';
import { getContrast, stageFacts } from '$lib/server/contrasts';
import { db } from '$lib/server/database';

/** A contrast's address without a stage leads to the furthest one that has something to show. */
export async function load(event) {
  const member = allow(event, 'contrast.read');
  const { contrastId } = event.params;
  const contrast = await getContrast(db, member, contrastId);
  const facts = (await stageFacts(db, member, contrast.id)).at(-1);
  const stage = !facts ? 'define' : facts.run?.state === 'finished' ? 'result' : 'run';
  redirect(307, `/contrasts/${contrastId}/${stage}`);
}
