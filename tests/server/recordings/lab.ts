import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Db } from '$lib/server/database';
import { ingestRecording, type NewRecording } from '$lib/server/recordings';
import type { Storage } from '$lib/server/storage';
import { fileStorage } from '$lib/server/storage/file-storage';
import { makeMember, makeStudy } from '../contrasts/fixture';

export interface Lab {
  folder: string;
  storage: Storage;
  member: App.Member;
  studyId: string;
  /** Ingests bytes as the named file for participant P01, with changes. */
  ingest(bytes: Uint8Array, changes?: Partial<NewRecording>): ReturnType<typeof ingestRecording>;
  close(): Promise<void>;
}

/** A team with a study of its own, and a storage in a folder of its own. */
export async function openLab(db: Db): Promise<Lab> {
  const folder = await mkdtemp(join(tmpdir(), 'nullwright-lab-'));
  const storage = fileStorage(join(folder, 'storage'));
  const member = await makeMember(db);
  const studyId = await makeStudy(db, member);
  return {
    folder,
    storage,
    member,
    studyId,
    async ingest(bytes, changes = {}) {
      const path = join(folder, 'incoming.edf');
      await writeFile(path, bytes);
      return ingestRecording(db, storage, member, {
        studyId,
        participantCode: 'P01',
        name: 'rest.edf',
        path,
        keepIdentification: false,
        ...changes,
      });
    },
    close: () => rm(folder, { recursive: true }),
  };
}
