import {
  factsOf,
  openEdf,
  type ByteSource,
  type DescribedChannel,
  type DescribedRecording,
} from '$engine';
import { notFound } from '../access/not-found';
import { record } from '../audit';
import type { Member } from '../access';
import type { Db } from '../database';
import type { Storage } from '../storage';
import { lockedUse } from './locked-use';
import { insertEvents } from './rows';
import { readSidecars, type SidecarFiles } from './sidecars';

export type Attached = { ok: true; notices: string[] } | { ok: false; message: string };

type Notices = { code: string; message: string }[];

/**
 * Puts sidecars beside a stored recording: events.tsv takes the place of the events, channels.tsv
 * of types and bad marks, electrodes.tsv of positions. Events stay as they are once a locked plan
 * counts on them. Throws IngestError for a sidecar that cannot be read.
 */
export async function attachSidecars(
  db: Db,
  storage: Storage,
  member: Member,
  recordingId: string,
  files: SidecarFiles,
): Promise<Attached> {
  const sidecars = readSidecars(files);
  const recording = await storedRecording(db, member.teamId, recordingId);
  const described = await describeStored(storage, recording, sidecars);
  const before = sidecars.events ? withoutEventNotices(recording.notices) : recording.notices;
  const notices = newNotices(before, described.notices);
  return db.transaction().execute(async (trx) => {
    if (sidecars.events) {
      const refused = await eventsAreLocked(trx, member.teamId, recording);
      if (refused) return refused;
      await replaceEvents(trx, member.teamId, recordingId, described);
    }
    if (sidecars.channels ?? sidecars.electrodes) {
      const parts = { types: !!sidecars.channels, positions: !!sidecars.electrodes };
      await updateChannels(trx, member.teamId, recordingId, described, parts);
    }
    await setNotices(trx, member.teamId, recordingId, [...before, ...notices]);
    const detail = { files: Object.values(files).map((file) => file.name) };
    await record(trx, member, 'recording.sidecars-added', subject(recordingId), detail);
    return { ok: true, notices: notices.map((notice) => notice.message) };
  });
}

/** Gives up an events.tsv: the events are the file's own annotations again. */
export async function restoreAnnotations(
  db: Db,
  storage: Storage,
  member: Member,
  recordingId: string,
): Promise<Attached> {
  const recording = await storedRecording(db, member.teamId, recordingId);
  const described = await describeStored(storage, recording, {});
  const before = withoutEventNotices(recording.notices);
  const notices = newNotices(before, described.notices);
  return db.transaction().execute(async (trx) => {
    const refused = await eventsAreLocked(trx, member.teamId, recording);
    if (refused) return refused;
    await replaceEvents(trx, member.teamId, recordingId, described);
    await setNotices(trx, member.teamId, recordingId, [...before, ...notices]);
    await record(trx, member, 'recording.annotations-restored', subject(recordingId));
    return { ok: true, notices: notices.map((notice) => notice.message) };
  });
}

const subject = (id: string) => ({ type: 'recording', id });

type StoredRecording = Awaited<ReturnType<typeof storedRecording>>;

async function storedRecording(db: Db, teamId: string, recordingId: string) {
  const recording = await db
    .selectFrom('recording')
    .select(['id', 'studyId', 'sha256', 'name', 'storageKey', 'sizeBytes', 'notices'])
    .where('teamId', '=', teamId)
    .where('id', '=', recordingId)
    .executeTakeFirst();
  return recording ?? notFound('recording');
}

/** Takes the recording's row first: no plan that counts on its events is locked meanwhile. */
async function eventsAreLocked(trx: Db, teamId: string, recording: StoredRecording) {
  const held = await trx
    .selectFrom('recording')
    .select('id')
    .where('teamId', '=', teamId)
    .where('id', '=', recording.id)
    .forUpdate()
    .executeTakeFirst();
  if (!held) notFound('recording');
  const contrasts = await lockedUse(trx, teamId, recording);
  if (contrasts.length === 0) return null;
  const message =
    `The events of ${recording.name} cannot change: locked plans count on them ` +
    `(${contrasts.join(', ')}).`;
  return { ok: false as const, message };
}

async function describeStored(
  storage: Storage,
  recording: StoredRecording,
  sidecars: Parameters<typeof factsOf>[2],
): Promise<DescribedRecording> {
  const source: ByteSource = {
    size: recording.sizeBytes,
    read: (offset, length) => storage.read(recording.storageKey, offset, length),
  };
  return factsOf(await openEdf(source), recording, sidecars);
}

/** What was said about events that are about to be replaced no longer holds. */
function withoutEventNotices(notices: Notices): Notices {
  return notices.filter((notice) => notice.code !== 'events-outside');
}

function newNotices(before: Notices, after: Notices): Notices {
  const known = new Set(before.map((notice) => notice.message));
  return after.filter((notice) => !known.has(notice.message));
}

async function replaceEvents(
  trx: Db,
  teamId: string,
  recordingId: string,
  { facts, eventSource }: DescribedRecording,
): Promise<void> {
  await trx
    .deleteFrom('event')
    .where('teamId', '=', teamId)
    .where('recordingId', '=', recordingId)
    .execute();
  await insertEvents(trx, teamId, recordingId, facts.events, eventSource);
}

async function updateChannels(
  trx: Db,
  teamId: string,
  recordingId: string,
  { facts }: DescribedRecording,
  parts: { types: boolean; positions: boolean },
): Promise<void> {
  const channels: DescribedChannel[] = facts.channels;
  for (const [position, channel] of channels.entries()) {
    const { x = null, y = null, z = null } = channel.position ?? {};
    await trx
      .updateTable('channel')
      .set({
        ...(parts.types && { type: channel.type, bad: channel.bad }),
        ...(parts.positions && { x, y, z, positionSource: channel.positionSource }),
      })
      .where('teamId', '=', teamId)
      .where('recordingId', '=', recordingId)
      .where('position', '=', position)
      .execute();
  }
}

async function setNotices(trx: Db, teamId: string, recordingId: string, notices: Notices) {
  await trx
    .updateTable('recording')
    .set({ notices: JSON.stringify(notices) })
    .where('teamId', '=', teamId)
    .where('id', '=', recordingId)
    .execute();
}
