import { randomUUID } from 'node:crypto';
import type { Selectable } from 'kysely';
import {
  blankIdentification,
  EdfError,
  factsOf,
  openEdf,
  type DescribedRecording,
  type EdfFile,
} from '$engine';
import { participantCodePattern, participantCodeRule } from '$lib/model/participant';
import { notFound } from '../access/not-found';
import { record } from '../audit';
import type { Member } from '../access';
import type { Database, Db } from '../database';
import type { Storage } from '../storage';
import { storedBytes } from './blanked-stream';
import { openFileSource } from '$workers/file-source';
import { IngestError } from './ingest-error';
import { participantWith } from './participant';
import { insertChannels, insertEvents } from './rows';
import { readSidecars, type SidecarFiles } from './sidecars';

export interface NewRecording {
  studyId: string;
  participantCode: string;
  /** Shown in lists and plans; mostly the file's own name. */
  name: string;
  /** Where the file lies now; it is read, never changed. */
  path: string;
  /** False blanks the header fields that identify a person. */
  keepIdentification: boolean;
  sidecars?: SidecarFiles;
  simulated?: boolean;
}

type Notices = Selectable<Database['recording']>['notices'];

export type Ingested =
  | { kind: 'stored'; id: string; name: string; sha256: string; notices: Notices }
  | { kind: 'duplicate'; id: string; name: string; participant: string };

/** Bytes at the front of a file that hold the identifying fields. */
const headBytes = 256;

/**
 * Reads, hashes and stores a recording with its channels and events. The file is streamed, never
 * held whole. The same recording in the same study is recognised whether or not its
 * identification was kept, and is not stored twice. Whatever fails, nothing is left behind.
 * Throws IngestError for what the person can mend.
 */
export async function ingestRecording(
  db: Db,
  storage: Storage,
  member: Member,
  input: NewRecording,
): Promise<Ingested> {
  if (!participantCodePattern.test(input.participantCode)) {
    const message = `Participant code "${input.participantCode}": ${participantCodeRule}`;
    throw new IngestError('bad-participant', message);
  }
  if (input.name.trim() === '' || input.name.length > 255) {
    throw new IngestError('bad-name', 'The name must have 1 to 255 characters. Rename the file.');
  }
  await mustHaveStudy(db, member.teamId, input.studyId);
  const { file, described, head } = await describe(input);

  const id = randomUUID();
  const storageKey = `recordings/${id.slice(0, 2)}/${id}`;
  const stored = storedBytes(input.path, head, input.keepIdentification);
  const { sizeBytes, sha256 } = await storage.put(storageKey, stored.bytes);
  const hashes = { sha256, contentSha256: stored.contentSha256() };
  try {
    await saveRows(db, member, input, {
      id,
      storageKey,
      sizeBytes,
      ...hashes,
      file,
      described,
    });
    return { kind: 'stored', id, name: input.name, sha256, notices: described.notices };
  } catch (reason) {
    await storage.remove(storageKey);
    const violated = reason instanceof Error && 'constraint' in reason ? reason.constraint : null;
    if (violated !== 'recording_study_content_key') throw reason;
    return duplicateOf(db, member.teamId, input.studyId, hashes.contentSha256);
  }
}

async function mustHaveStudy(db: Db, teamId: string, studyId: string): Promise<void> {
  const study = await db
    .selectFrom('study')
    .select('id')
    .where('teamId', '=', teamId)
    .where('id', '=', studyId)
    .executeTakeFirst();
  if (!study) notFound('study');
}

/** Everything that the file and its sidecars say, and the file's first bytes blanked. */
async function describe(input: NewRecording) {
  const sidecars = readSidecars(input.sidecars ?? {});
  const { source, close } = await openFileSource(input.path);
  try {
    const file = await openEdf(source);
    const described = await factsOf(file, { sha256: '', name: input.name }, sidecars);
    return { file, described, head: blankIdentification(await source.read(0, headBytes)) };
  } catch (reason) {
    if (!(reason instanceof EdfError)) throw reason;
    throw new IngestError(
      'unreadable',
      `${input.name} cannot be read as EDF: ${reason.message}. Export it again from its source.`,
    );
  } finally {
    await close();
  }
}

interface Stored {
  id: string;
  storageKey: string;
  sizeBytes: number;
  sha256: string;
  contentSha256: string;
  file: EdfFile;
  described: DescribedRecording;
}

async function saveRows(db: Db, member: Member, input: NewRecording, stored: Stored) {
  const { id, file, described } = stored;
  const { teamId } = member;
  await db.transaction().execute(async (trx) => {
    const { studyId, participantCode: code } = input;
    const participantId = await participantWith(trx, teamId, { studyId, code });
    await trx
      .insertInto('recording')
      .values({
        id,
        teamId,
        studyId,
        participantId,
        name: input.name,
        sha256: stored.sha256,
        contentSha256: stored.contentSha256,
        sizeBytes: stored.sizeBytes,
        storageKey: stored.storageKey,
        format: file.format,
        startedAt: file.startedAt,
        durationS: file.durationS,
        recordCount: file.recordCount,
        recordDurationS: file.recordDurationS,
        segments: JSON.stringify(described.facts.segments),
        notices: JSON.stringify(described.notices),
        identificationKept: input.keepIdentification,
        simulated: input.simulated ?? false,
        uploadedBy: member.personId,
      })
      .execute();
    await insertChannels(trx, teamId, id, described.facts.channels);
    await insertEvents(trx, teamId, id, described.facts.events, described.eventSource);
    await record(
      trx,
      member,
      'recording.added',
      { type: 'recording', id },
      {
        name: input.name,
        participant: input.participantCode,
        sha256: stored.sha256,
        identificationKept: input.keepIdentification,
      },
    );
  });
}

async function duplicateOf(db: Db, teamId: string, studyId: string, contentSha256: string) {
  const there = await db
    .selectFrom('recording')
    .innerJoin('participant', 'participant.id', 'recording.participantId')
    .select(['recording.id', 'recording.name', 'participant.code as participant'])
    .where('recording.teamId', '=', teamId)
    .where('recording.studyId', '=', studyId)
    .where('recording.contentSha256', '=', contentSha256)
    .executeTakeFirstOrThrow();
  return { kind: 'duplicate' as const, ...there };
}
