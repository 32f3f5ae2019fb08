import { kindOf } from '$lib/model/bids-names';
import type { Member } from '../access';
import type { Db } from '../database';
import type { Storage } from '../storage';
import { attachSidecars, type Attached } from './attach';
import { IngestError } from './ingest-error';
import type { SidecarFiles } from './sidecars';

/** Attaches the files of a form's field `file`; each is told apart by the end of its name. */
export async function attachFromForm(
  db: Db,
  storage: Storage,
  member: Member,
  recordingId: string,
  form: FormData,
): Promise<Attached> {
  const files: SidecarFiles = {};
  for (const file of form.getAll('file')) {
    if (typeof file === 'string' || file.size === 0) continue;
    const kind = kindOf(file.name);
    if (kind !== 'events' && kind !== 'channels' && kind !== 'electrodes') {
      const message =
        `${file.name} is no sidecar of a recording. Its name must end in events.tsv, ` +
        'channels.tsv or electrodes.tsv.';
      return { ok: false, message };
    }
    files[kind] = { name: file.name, bytes: new Uint8Array(await file.arrayBuffer()) };
  }
  if (Object.keys(files).length === 0) return { ok: false, message: 'Choose a file first.' };
  try {
    return await attachSidecars(db, storage, member, recordingId, files);
  } catch (reason) {
    if (reason instanceof IngestError) return { ok: false, message: reason.message };
    throw reason;
  }
}
