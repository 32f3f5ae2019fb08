import { allow, may } from '$lib/server/access';
import { getContrast, stageFacts } from '$lib/server/contrasts';
import { db } from '$lib/server/database';

export async function load(event) {
  const member = allow(event, 'contrast.read');
  const { contrastId } = event.params;
  const asked = Number(event.url.searchParams.get('plan'));
  const [contrast, facts] = await Promise.all([
    getContrast(db, member, contrastId),
    stageFacts(db, member, contrastId),
  ]);
  return {
    contrast,
    stageFacts: facts,
    /** The plan version named in the address, or null for each page's own default. */
    askedVersion: contrast.plans.some((plan) => plan.version === asked) ? asked : null,
    mayWrite: may(member.role, 'contrast.write'),
    crumbs: [
      { label: contrast.studyName, href: `/studies/${contrast.studyId}` },
      { label: contrast.name },
    ],
  };
}
