import { fail } from '@sveltejs/kit';
import { z } from 'zod';
import { participantCodePattern, participantCodeRule } from '$lib/model/participant';
import { allow, may } from '$lib/server/access';
import { db } from '$lib/server/database';
import {
  assignParticipant,
  markChannel,
  recordingDetail,
  restoreAnnotations,
} from '$lib/server/recordings';
import { attachFromForm } from '$lib/server/recordings/attach-form';
import { storage } from '$lib/server/storage';

const markSchema = z.object({ site: z.string().min(1).max(255), bad: z.enum(['true', 'false']) });

export async function load(event) {
  const member = allow(event, 'recording.read');
  const { studyId, recordingId } = event.params;
  const recording = await recordingDetail(db, member.teamId, studyId, recordingId);
  return {
    meta: { title: recording.name },
    crumbs: [
      { label: 'Studies', href: '/studies' },
      { label: recording.studyName, href: `/studies/${studyId}` },
      { label: 'Recordings', href: `/studies/${studyId}/recordings` },
      { label: recording.name },
    ],
    recording,
    mayWrite: may(member.role, 'recording.write'),
    mayDownload: may(member.role, 'recording.download'),
  };
}

export const actions = {
  mark: async (event) => {
    const member = allow(event, 'recording.write');
    const form = markSchema.safeParse(Object.fromEntries(await event.request.formData()));
    if (!form.success) return fail(400, { message: 'Say which channel, and whether it is bad.' });
    const { site, bad } = form.data;
    await markChannel(db, member, event.params.recordingId, { site, bad: bad === 'true' });
    return { marked: site };
  },

  attach: async (event) => {
    const member = allow(event, 'recording.write');
    const form = await event.request.formData();
    const attached = await attachFromForm(db, storage, member, event.params.recordingId, form);
    return attached.ok ? { attached: true } : fail(400, { message: attached.message });
  },

  participant: async (event) => {
    const member = allow(event, 'recording.write');
    const code = (await event.request.formData()).get('code');
    if (typeof code !== 'string' || !participantCodePattern.test(code.trim())) {
      return fail(400, { message: `Participant code: ${participantCodeRule}` });
    }
    const { recordingId } = event.params;
    const assigned = await assignParticipant(db, member, recordingId, code.trim());
    return assigned.ok ? { assigned: true } : fail(409, { message: assigned.message });
  },

  restore: async (event) => {
    const member = allow(event, 'recording.write');
    const restored = await restoreAnnotations(db, storage, member, event.params.recordingId);
    return restored.ok ? { restored: true } : fail(409, { message: restored.message });
  },
};
