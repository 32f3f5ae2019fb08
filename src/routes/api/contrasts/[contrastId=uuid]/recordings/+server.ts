import { json } from '@sveltejs/kit';
import { allow } from '$lib/server/access';
import { getContrast, participantRecordings } from '$lib/server/contrasts';
import { db } from '$lib/server/database';

/** Facts of one participant's recordings, for the form when another participant is chosen. */
export async function GET(event) {
  const member = allow(event, 'contrast.read');
  const { studyId } = await getContrast(db, member, event.params.contrastId);
  const participant = event.url.searchParams.get('participant') ?? '';
  return json(await participantRecordings(db, member, studyId, participant));
}
