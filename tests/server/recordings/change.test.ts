import { afterAll, afterEach, beforeEach, describe, expect, it } from 'vitest';
import { createContrast } from '$lib/server/contrasts';
import {
  assignParticipant,
  attachSidecars,
  listRecordings,
  markChannel,
  recordingDetail,
  removeRecording,
} from '$lib/server/recordings';
import { addParticipants, listParticipants, removeParticipant } from '$lib/server/studies';
import { smallBytes } from '../../engine/read/samples';
import { openDatabase, waitsForRow } from '../contrasts/fixture';
import type { Db } from '$lib/server/database';
import { openLab, type Lab } from './lab';

const db = openDatabase();
afterAll(() => db.destroy());

let lab: Lab;
beforeEach(async () => {
  lab = await openLab(db);
});
afterEach(() => lab.close());

/** A locked plan that names this recording, straight into the table. */
async function lockPlanOn(sha256: string, name: string, on: Db = db) {
  const made = await createContrast(db, lab.member, { studyId: lab.studyId, name, question: '?' });
  if (!made.ok) throw new Error(made.message);
  await on
    .updateTable('plan')
    .set({
      body: JSON.stringify({ recordings: [{ sha256, name: 'rest.edf' }] }),
      hash: '0'.repeat(64),
      lockedAt: new Date(),
      lockedBy: lab.member.personId,
    })
    .where('contrastId', '=', made.id)
    .execute();
}

async function ingested() {
  const stored = await lab.ingest(smallBytes());
  if (stored.kind !== 'stored') throw new Error('expected a stored recording');
  return stored;
}

describe('a stored recording', () => {
  it('is deleted with its file, channels and events', async () => {
    const { id } = await ingested();
    const { storageKey } = await db
      .selectFrom('recording')
      .select('storageKey')
      .where('id', '=', id)
      .executeTakeFirstOrThrow();
    expect(await removeRecording(db, lab.storage, lab.member, id)).toEqual({
      ok: true,
      name: 'rest.edf',
    });
    expect(await lab.storage.exists(storageKey)).toBe(false);
    const events = await db
      .selectFrom('event')
      .select('id')
      .where('recordingId', '=', id)
      .execute();
    expect(events).toEqual([]);
  });

  it('stays when a locked plan names its hash, and says which', async () => {
    const { id, sha256 } = await ingested();
    await lockPlanOn(sha256, 'Cued against free');
    expect(await removeRecording(db, lab.storage, lab.member, id)).toEqual({
      ok: false,
      name: 'rest.edf',
      lockedContrasts: ['Cued against free'],
    });
    expect(await listRecordings(db, lab.member.teamId, lab.studyId)).toHaveLength(1);
  });

  it('keeps its events once a locked plan counts on them', async () => {
    const { id, sha256 } = await ingested();
    await lockPlanOn(sha256, 'Cued against free');
    const bytes = new TextEncoder().encode('onset\tduration\n1\t0');
    const events = { name: 'rest_events.tsv', bytes };
    const attached = await attachSidecars(db, lab.storage, lab.member, id, { events });
    expect(attached).toMatchObject({
      ok: false,
      message: expect.stringContaining('Cued against free'),
    });
    const detail = await recordingDetail(db, lab.member.teamId, lab.studyId, id);
    expect(detail.events.map((event) => event.label)).toEqual(['go', 'stöp']);
  });

  it('keeps its events when a plan is locked while new ones are read', async () => {
    const { id, sha256 } = await ingested();
    const locking = await db.startTransaction().execute();
    // As locking a plan does.
    await locking.selectFrom('recording').select('id').where('id', '=', id).forShare().execute();
    const bytes = new TextEncoder().encode('onset\tduration\n1\t0');
    const events = { name: 'rest_events.tsv', bytes };
    const attaching = attachSidecars(db, lab.storage, lab.member, id, { events });
    await waitsForRow(db, attaching);
    await lockPlanOn(sha256, 'Cued against free', locking);
    await locking.commit().execute();
    expect(await attaching).toMatchObject({ ok: false });
    const detail = await recordingDetail(db, lab.member.teamId, lab.studyId, id);
    expect(detail.events.map((event) => event.label)).toEqual(['go', 'stöp']);
  });

  it('can be given to another participant until a locked plan names it', async () => {
    const { id, sha256 } = await ingested();
    expect(await assignParticipant(db, lab.member, id, 'P02')).toEqual({ ok: true });
    const moved = await recordingDetail(db, lab.member.teamId, lab.studyId, id);
    expect(moved.participant).toBe('P02');
    await lockPlanOn(sha256, 'Cued against free');
    expect(await assignParticipant(db, lab.member, id, 'P03')).toMatchObject({ ok: false });
    const codes = await listParticipants(db, lab.member.teamId, lab.studyId);
    expect(codes.map((participant) => participant.code)).toEqual(['P01', 'P02']);
  });

  it('remembers which channels are bad', async () => {
    const { id } = await ingested();
    await markChannel(db, lab.member, id, { site: 'T7', bad: true });
    const { channels } = await recordingDetail(db, lab.member.teamId, lab.studyId, id);
    expect(channels.map(({ site, bad }) => [site, bad])).toEqual([
      ['Fp1', false],
      ['T7', true],
      ['Temp', false],
    ]);
    await expect(markChannel(db, lab.member, id, { site: 'Oz', bad: true })).rejects.toMatchObject({
      status: 404,
    });
  });

  it('shows its counts, rates and participant in the list', async () => {
    const { id } = await ingested();
    const [listed] = await listRecordings(db, lab.member.teamId, lab.studyId);
    expect(listed).toMatchObject({
      id,
      participant: 'P01',
      channelCount: 3,
      badCount: 0,
      samplingRatesHz: [2, 8],
      events: [
        { label: 'go', count: 1 },
        { label: 'stöp', count: 1 },
      ],
    });
  });

  it('can be neither changed nor deleted by another team', async () => {
    const { id } = await ingested();
    const other = await openLab(db);
    const { member, storage } = other;
    await expect(removeRecording(db, storage, member, id)).rejects.toMatchObject({ status: 404 });
    await expect(markChannel(db, member, id, { site: 'T7', bad: true })).rejects.toMatchObject({
      status: 404,
    });
    await expect(attachSidecars(db, storage, member, id, {})).rejects.toMatchObject({
      status: 404,
    });
    await expect(recordingDetail(db, member.teamId, lab.studyId, id)).rejects.toMatchObject({
      status: 404,
    });
    await other.close();
  });
});

describe('participants', () => {
  it('are codes, each once in a study, removable while they have no recording', async () => {
    await ingested();
    expect(await addParticipants(db, lab.member, lab.studyId, ['P01', 'P02'])).toBe(1);
    const [first, second] = await listParticipants(db, lab.member.teamId, lab.studyId);
    expect([first!.code, second!.code]).toEqual(['P01', 'P02']);
    expect(await removeParticipant(db, lab.member, lab.studyId, first!.id)).toMatchObject({
      ok: false,
    });
    expect(await removeParticipant(db, lab.member, lab.studyId, second!.id)).toEqual({
      ok: true,
      code: 'P02',
    });
  });
});
