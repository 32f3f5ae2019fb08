import { buffer } from 'node:stream/consumers';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { downloadRecording } from '$lib/server/recordings';
import { readRange } from '$lib/server/recordings/range';
import { smallBytes } from '../../engine/read/samples';
import { openDatabase } from '../contrasts/fixture';
import { openLab, type Lab } from './lab';

const db = openDatabase();
let lab: Lab;
let id: string;
let bytes: Buffer;
let sha256: string;

beforeAll(async () => {
  lab = await openLab(db);
  const ingested = await lab.ingest(smallBytes(), { name: 'rest "1" ü.edf' });
  id = ingested.id;
  const row = await db
    .selectFrom('recording')
    .select(['storageKey', 'sha256'])
    .where('id', '=', id)
    .executeTakeFirstOrThrow();
  bytes = await buffer(lab.storage.stream(row.storageKey));
  sha256 = row.sha256;
});
afterAll(async () => {
  await lab.close();
  await db.destroy();
});

async function get(headers: Record<string, string> = {}, method = 'GET', member = lab.member) {
  const request = new Request(`http://localhost/api/recordings/${id}/file`, { headers, method });
  const response = await downloadRecording(db, lab.storage, member, id, request);
  return { response, body: Buffer.from(await response.arrayBuffer()) };
}

describe('a recording’s file', () => {
  it('comes whole, with its hash as ETag and its name, for private caches only', async () => {
    const { response, body } = await get();
    expect(response.status).toBe(200);
    expect(body).toEqual(bytes);
    expect(Object.fromEntries(response.headers)).toMatchObject({
      'accept-ranges': 'bytes',
      'cache-control': 'private, no-cache',
      'content-length': String(bytes.length),
      'content-disposition': `attachment; filename*=UTF-8''rest%20%221%22%20%C3%BC.edf`,
      etag: `"${sha256}"`,
    });
  });

  it.each([
    ['bytes=0-0', 0, 0],
    ['bytes=256-999', 256, 999],
    ['bytes=1000-', 1000, Number.POSITIVE_INFINITY],
    ['bytes=-10', -10, Number.POSITIVE_INFINITY],
    ['bytes=100-99999999', 100, Number.POSITIVE_INFINITY],
  ])('comes in parts: %s', async (range, first, last) => {
    const start = first < 0 ? bytes.length + first : first;
    const end = Math.min(last, bytes.length - 1);
    const { response, body } = await get({ Range: range });
    expect(response.status).toBe(206);
    expect(response.headers.get('content-range')).toBe(`bytes ${start}-${end}/${bytes.length}`);
    expect(body).toEqual(bytes.subarray(start, end + 1));
  });

  it('refuses a range behind its end with its size', async () => {
    const { response } = await get({ Range: `bytes=${bytes.length}-` });
    expect(response.status).toBe(416);
    expect(response.headers.get('content-range')).toBe(`bytes */${bytes.length}`);
  });

  it('is recorded when it leaves whole, also as a range from its first byte on', async () => {
    const downloads = async () => {
      const rows = await db
        .selectFrom('auditEvent')
        .select('id')
        .where('action', '=', 'recording.downloaded')
        .where('subjectId', '=', id)
        .execute();
      return rows.length;
    };
    const before = await downloads();
    await get();
    await get({ Range: 'bytes=0-' });
    await get({ Range: 'bytes=0-9' });
    expect(await downloads()).toBe(before + 2);
  });

  it('is not sent again to who has it', async () => {
    const { response, body } = await get({ 'If-None-Match': `"${sha256}"` });
    expect(response.status).toBe(304);
    expect(body.length).toBe(0);
  });

  it('comes whole when the part belongs to another version', async () => {
    const { response } = await get({ Range: 'bytes=0-9', 'If-Range': '"other"' });
    expect(response.status).toBe(200);
    const same = await get({ Range: 'bytes=0-9', 'If-Range': `"${sha256}"` });
    expect(same.response.status).toBe(206);
  });

  it('answers HEAD without bytes', async () => {
    const { response, body } = await get({}, 'HEAD');
    expect(response.headers.get('content-length')).toBe(String(bytes.length));
    expect(body.length).toBe(0);
  });

  it('does not exist for another team', async () => {
    const other = await openLab(db);
    await expect(get({}, 'GET', other.member)).rejects.toMatchObject({ status: 404 });
    await other.close();
  });
});

describe('reading a Range header', () => {
  it.each([
    [null, 'whole'],
    ['bytes=0-1,5-6', 'whole'],
    ['items=0-1', 'whole'],
    ['bytes=5-2', 'whole'],
    ['bytes=-', 'whole'],
    ['bytes=a-b', 'whole'],
    ['bytes=-0', 'unsatisfiable'],
    ['bytes=10-', 'unsatisfiable'],
    ['bytes=-20', { start: 0, end: 9 }],
  ])('%s of 10 bytes gives %o', (header, answer) => {
    expect(readRange(header, 10)).toEqual(answer);
  });
});
