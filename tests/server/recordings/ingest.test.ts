import { createHash, randomUUID } from 'node:crypto';
import { readdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { buffer } from 'node:stream/consumers';
import { afterAll, afterEach, beforeEach, describe, expect, it } from 'vitest';
import {
  attachSidecars,
  ingestRecording,
  recordingFacts,
  restoreAnnotations,
} from '$lib/server/recordings';
import { overwrite, smallBytes } from '../../engine/read/samples';
import { openDatabase } from '../contrasts/fixture';
import { openLab, type Lab } from './lab';

const db = openDatabase();
afterAll(() => db.destroy());

let lab: Lab;
beforeEach(async () => {
  lab = await openLab(db);
});
afterEach(() => lab.close());

const sha256 = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest('hex');
const tsv = (name: string, ...lines: string[]) => ({
  name,
  bytes: new TextEncoder().encode(lines.join('\n')),
});

async function stored(ingested: Awaited<ReturnType<Lab['ingest']>>) {
  if (ingested.kind !== 'stored') throw new Error('expected a stored recording');
  const row = await db
    .selectFrom('recording')
    .selectAll()
    .where('id', '=', ingested.id)
    .executeTakeFirstOrThrow();
  const bytes = await buffer(lab.storage.stream(row.storageKey));
  const [facts] = await recordingFacts(db, lab.member.teamId, { ids: [row.id] });
  return { row, bytes, facts: facts! };
}

async function nothingIsLeft() {
  const rows = await db
    .selectFrom('recording')
    .select('id')
    .where('studyId', '=', lab.studyId)
    .execute();
  expect(rows).toEqual([]);
  const options = { recursive: true, withFileTypes: true } as const;
  const entries = await readdir(join(lab.folder, 'storage'), options).catch(() => []);
  expect(entries.filter((entry) => entry.isFile())).toEqual([]);
}

/** "P. Example" and a technician in the identification fields. */
const named = () =>
  smallBytes({
    patient: 'MRN17 F 02-MAY-1980 P._Example',
    recording: 'Startdate 05-MAR-2024 EMG561 T_Technician amp7',
  });

describe('a recording that is taken in', () => {
  it('is stored with its hash, channels with sites and positions, and events', async () => {
    const { row, bytes, facts } = await stored(await lab.ingest(smallBytes()));
    expect(row).toMatchObject({
      format: 'EDF+C',
      durationS: 4,
      recordCount: 4,
      startedAt: '2024-03-05T10:20:30',
      identificationKept: false,
    });
    expect(row.sha256).toBe(sha256(bytes));
    expect(row.sizeBytes).toBe(bytes.length);
    expect(
      facts.channels.map(({ site, unit, samplingRateHz }) => [site, unit, samplingRateHz]),
    ).toEqual([
      ['Fp1', 'uV', 8],
      ['T7', 'uV', 8],
      ['Temp', 'degC', 2],
    ]);
    // T7 lies one tenth of the half circle above the left ear: x = -cos 18 degrees.
    expect(facts.channels[1]!.position!.x).toBeCloseTo(-Math.cos(Math.PI / 10), 6);
    expect(facts.channels[2]!.position).toBeNull();
    expect(facts.events).toEqual([
      { onsetS: 0.5, durationS: null, label: 'go' },
      { onsetS: 2.25, durationS: 0.5, label: 'stöp' },
    ]);
    expect(facts.segments).toEqual([{ startS: 0, durationS: 4 }]);
  });

  it('loses the header fields that identify a person, and nothing else', async () => {
    const original = named();
    const { row, bytes } = await stored(await lab.ingest(original));
    expect(bytes.toString('latin1')).not.toMatch(/Example|MRN17|Technician|1980/);
    expect(bytes.subarray(168)).toEqual(Buffer.from(original.subarray(168)));
    expect(bytes.toString('latin1', 8, 88).trim()).toBe('X X X X');
    expect(row.sha256).toBe(row.contentSha256);
  });

  it('keeps them only when it is told to', async () => {
    const original = named();
    const { row, bytes } = await stored(await lab.ingest(original, { keepIdentification: true }));
    expect(bytes).toEqual(Buffer.from(original));
    expect(row.sha256).toBe(sha256(original));
    expect(row.contentSha256).not.toBe(row.sha256);
    expect(row.identificationKept).toBe(true);
  });

  it('is recognised the second time, whether or not its identification was kept', async () => {
    const first = await lab.ingest(named(), { name: 'first.edf', keepIdentification: true });
    const second = await lab.ingest(named(), { name: 'second.edf', participantCode: 'P02' });
    expect(second).toEqual({
      kind: 'duplicate',
      id: first.id,
      name: 'first.edf',
      participant: 'P01',
    });
    const files = await readdir(join(lab.folder, 'storage', 'recordings'), { recursive: true });
    expect(files.filter((name) => name.includes('-'))).toEqual([
      `${first.id.slice(0, 2)}/${first.id}`,
    ]);
    const codes = await db
      .selectFrom('participant')
      .select('code')
      .where('studyId', '=', lab.studyId)
      .execute();
    expect(codes).toEqual([{ code: 'P01' }]);
  });

  it('keeps the gaps of an EDF+D file as segments', async () => {
    const bytes = smallBytes({ recordStartsS: [0, 1, 10.5, 11.5] });
    const { row, facts } = await stored(await lab.ingest(bytes));
    expect(row.format).toBe('EDF+D');
    expect(row.durationS).toBe(4);
    expect(facts.segments).toEqual([
      { startS: 0, durationS: 2 },
      { startS: 10.5, durationS: 2 },
    ]);
  });

  it('keeps a truncated file up to its last whole record, with a notice', async () => {
    const bytes = smallBytes();
    const { row } = await stored(await lab.ingest(bytes.subarray(0, bytes.length - 3)));
    expect(row.recordCount).toBe(3);
    expect(row.notices.map((notice) => notice.code)).toContain('truncated');
  });

  it('belongs to its team alone', async () => {
    const ingested = await lab.ingest(smallBytes());
    const other = await openLab(db);
    const seen = await recordingFacts(db, other.member.teamId, { ids: [ingested.id] });
    expect(seen).toEqual([]);
    await other.close();
  });
});

describe('a file that cannot be taken in', () => {
  it.each([
    ['no EDF at all', new TextEncoder().encode('%PDF-1.7 '.repeat(80)), /version "0"/],
    ['an empty file', new Uint8Array(0), /has 0 bytes/],
    ['a header alone', smallBytes().subarray(0, 256 * 5), /no whole data record/],
    ['a wrong signal count', overwrite(smallBytes(), 252, 'four'), /number of signals/],
  ])('says what is wrong and leaves nothing behind: %s', async (_what, bytes, message) => {
    await expect(lab.ingest(bytes)).rejects.toMatchObject({
      name: 'IngestError',
      code: 'unreadable',
      spoilsFile: true,
      message: expect.stringMatching(message),
    });
    await nothingIsLeft();
  });

  it('leaves nothing behind when its sidecar is wrong, and says where', async () => {
    const events = tsv('rest_events.tsv', 'onset\tduration', '1.5\t0', 'soon\t0');
    const attempt = lab.ingest(smallBytes(), { sidecars: { events } });
    await expect(attempt).rejects.toMatchObject({
      code: 'bad-sidecar',
      spoilsFile: false,
      message: expect.stringMatching(/rest_events\.tsv, line 3.*soon/),
    });
    await nothingIsLeft();
  });

  it('leaves nothing behind when the database refuses its rows', async () => {
    const nobody = { ...lab.member, personId: randomUUID() };
    const path = join(lab.folder, 'rest.edf');
    await writeFile(path, smallBytes());
    const attempt = ingestRecording(db, lab.storage, nobody, {
      studyId: lab.studyId,
      participantCode: 'P01',
      name: 'rest.edf',
      path,
      keepIdentification: false,
    });
    await expect(attempt).rejects.toThrow('recording_uploaded_by_fkey');
    await nothingIsLeft();
  });

  it('is refused for a study of another team', async () => {
    const other = await openLab(db);
    await expect(lab.ingest(smallBytes(), { studyId: other.studyId })).rejects.toMatchObject({
      status: 404,
    });
    await other.close();
  });
});

describe('the BIDS files beside a recording', () => {
  const events = tsv(
    'rest_events.tsv',
    'onset\tduration\ttrial_type',
    '3\tn/a\ttap/free',
    '1\t0.25\ttap/cued',
  );
  const channels = tsv(
    'rest_channels.tsv',
    'name\ttype\tunits\tstatus',
    'T3\tEEG\tmV\tbad',
    'Temp\tMISC\toC\tgood',
  );
  const electrodes = tsv(
    'rest_electrodes.tsv',
    'name\tx\ty\tz',
    'Temp\t0\t0\t95',
    'T3\tn/a\tn/a\tn/a',
  );

  it('take the place of annotations, types, bad marks and positions', async () => {
    const ingested = await lab.ingest(smallBytes(), { sidecars: { events, channels, electrodes } });
    const { facts } = await stored(ingested);
    expect(facts.events).toEqual([
      { onsetS: 1, durationS: 0.25, label: 'tap/cued' },
      { onsetS: 3, durationS: null, label: 'tap/free' },
    ]);
    expect(facts.channels.map((channel) => channel.bad)).toEqual([false, true, false]);
    expect(facts.channels[2]!.position).not.toBeNull();
    const sources = await db
      .selectFrom('event')
      .select('source')
      .distinct()
      .where('recordingId', '=', ingested.id)
      .execute();
    expect(sources).toEqual([{ source: 'events.tsv' }]);
  });

  it('can be added later, each changing its own part only, and given up again', async () => {
    const { id } = await lab.ingest(smallBytes(), { sidecars: { channels } });
    await attachSidecars(db, lab.storage, lab.member, id, { events });
    const [later] = await recordingFacts(db, lab.member.teamId, { ids: [id] });
    expect(later!.events.map((event) => event.label)).toEqual(['tap/cued', 'tap/free']);
    expect(later!.channels.map((channel) => channel.bad)).toEqual([false, true, false]);

    await restoreAnnotations(db, lab.storage, lab.member, id);
    const [again] = await recordingFacts(db, lab.member.teamId, { ids: [id] });
    expect(again!.events.map((event) => event.label)).toEqual(['go', 'stöp']);
  });
});
