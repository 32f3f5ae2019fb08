import { fail } from '@sveltejs/kit';
import { z } from 'zod';
import { participantCodePattern } from '$lib/model/participant';
import { allow, may } from '$lib/server/access';
import { config } from '$lib/server/config';
import { db } from '$lib/server/database';
import { listRecordings, removeRecording } from '$lib/server/recordings';
import { attachFromForm } from '$lib/server/recordings/attach-form';
import { storage } from '$lib/server/storage';
import { addParticipants, getStudy, listParticipants } from '$lib/server/studies';

const uuid = z.uuid();
const codesSchema = z.array(z.string().regex(participantCodePattern)).min(1).max(10_000);

export async function load(event) {
  const member = allow(event, 'recording.read');
  event.depends('study:recordings');
  const { studyId } = event.params;
  const study = await getStudy(db, member.teamId, studyId);
  const [recordings, participants] = await Promise.all([
    listRecordings(db, member.teamId, studyId),
    listParticipants(db, member.teamId, studyId),
  ]);
  return {
    meta: { title: `Recordings of ${study.name}` },
    crumbs: [
      { label: 'Studies', href: '/studies' },
      { label: study.name, href: `/studies/${studyId}` },
      { label: 'Recordings' },
    ],
    study,
    recordings,
    participantCodes: participants.map((participant) => participant.code),
    uploadLimitBytes: config.uploadLimitBytes,
    mayWrite: may(member.role, 'recording.write'),
    /** The recording whose deletion is to be confirmed. */
    deleting: event.url.searchParams.get('delete'),
  };
}

export const actions = {
  delete: async (event) => {
    const member = allow(event, 'recording.write');
    const id = uuid.safeParse((await event.request.formData()).get('id'));
    if (!id.success) return fail(400, { message: 'Choose the recording to delete.' });
    const removed = await removeRecording(db, storage, member, id.data);
    if (removed.ok) return { deleted: removed.name };
    const contrasts = removed.lockedContrasts.join(', ');
    return fail(409, {
      message: `${removed.name} stays: locked plans use it (${contrasts}).`,
    });
  },

  attach: async (event) => {
    const member = allow(event, 'recording.write');
    const form = await event.request.formData();
    const id = uuid.safeParse(form.get('id'));
    if (!id.success) return fail(400, { message: 'Choose the recording the file belongs to.' });
    const attached = await attachFromForm(db, storage, member, id.data, form);
    return attached.ok ? { attached: true } : fail(400, { message: attached.message });
  },

  participants: async (event) => {
    const member = allow(event, 'study.write');
    const codes = codesSchema.safeParse((await event.request.formData()).getAll('code'));
    if (!codes.success) return fail(400, { message: 'Codes have letters, digits, "-" and "_".' });
    return { added: await addParticipants(db, member, event.params.studyId, codes.data) };
  },
};
