import { readdir } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { config } from '$lib/server/config';
import { uploadStore } from '$lib/server/uploads/store';
import * as route from '../../../src/routes/api/uploads/[...path]/+server';
import { smallBytes } from '../../engine/read/samples';
import { makeColleague, makeStudy, openDatabase } from '../contrasts/fixture';
import { openLab, type Lab } from '../recordings/lab';

const db = openDatabase();
let lab: Lab;
beforeAll(async () => {
  lab = await openLab(db);
});
afterAll(async () => {
  await lab.close();
  await db.destroy();
});

type Method = 'POST' | 'HEAD' | 'PATCH' | 'DELETE';
interface Call {
  headers?: Record<string, string>;
  body?: Uint8Array | string;
  member?: App.Member | null;
}

/** One request as the server would hand it to the route; refusals come back as their status. */
async function call(method: Method, path: string, { headers, body, member = lab.member }: Call) {
  const url = new URL(`http://localhost/api/uploads${path ? `/${path}` : ''}`);
  const person = member && { id: member.personId, name: member.personName, email: 'x@example.org' };
  const request = new Request(url, {
    method,
    headers: { 'Tus-Resumable': '1.0.0', ...headers },
    ...(body === undefined ? {} : { body: body as BodyInit }),
  });
  const event = { request, url, params: { path }, locals: { person, member } };
  try {
    return await route[method](event as unknown as Parameters<typeof route.POST>[0]);
  } catch (reason) {
    const { status, body: told } = reason as { status: number; body: unknown };
    if (status === undefined) throw reason;
    return Response.json(told, { status });
  }
}

const base64 = (text: string) => Buffer.from(text).toString('base64');

async function create(size: number, changes: { studyId?: string; filename?: string } & Call = {}) {
  const { studyId = lab.studyId, filename = 'rest.edf', ...rest } = changes;
  return call('POST', '', {
    headers: {
      'Upload-Length': String(size),
      'Upload-Metadata': `filename ${base64(filename)},studyId ${base64(studyId)},teamId ${base64('forged')}`,
    },
    ...rest,
  });
}

const idOf = (response: Response) => response.headers.get('location')!.split('/').at(-1)!;

const patch = (id: string, offset: number, body: Uint8Array, rest: Call = {}) =>
  call('PATCH', id, {
    headers: { 'Content-Type': 'application/offset+octet-stream', 'Upload-Offset': String(offset) },
    body,
    ...rest,
  });

const finish = (id: string, changes: object = {}, rest: Call = {}) =>
  call('POST', id, {
    headers: { 'Content-Type': 'application/json' },
    body: JSON.stringify({ participant: 'P01', keepIdentification: false, ...changes }),
    ...rest,
  });

describe('an upload', () => {
  it('goes on where it broke off, and becomes a recording when it is finished', async () => {
    const bytes = smallBytes();
    const created = await create(bytes.length);
    expect(created.status).toBe(201);
    const id = idOf(created);
    expect((await patch(id, 0, bytes.subarray(0, 1000))).status).toBe(204);

    const asked = await call('HEAD', id, {});
    expect(asked.headers.get('upload-offset')).toBe('1000');
    expect((await patch(id, 500, bytes.subarray(500))).status).toBe(409);
    expect((await finish(id)).status).toBe(409);
    expect((await patch(id, 1000, bytes.subarray(1000))).status).toBe(204);

    const done = await finish(id);
    expect(done.status).toBe(201);
    expect(await done.json()).toMatchObject({ kind: 'stored', name: 'rest.edf' });
    const kept = await readdir(join(config.dataDir, 'uploads'));
    expect(kept.filter((name) => name.startsWith(id))).toEqual([]);
    expect((await finish(id)).status).toBe(404);
  });

  it('of a recording that is here already is answered with its place', async () => {
    const bytes = smallBytes({ startedAt: '2020-01-01T00:00:00' });
    const first = idOf(await create(bytes.length, { filename: 'first.edf' }));
    await patch(first, 0, bytes);
    await finish(first, { participant: 'P07' });
    const second = idOf(await create(bytes.length, { filename: 'second.edf' }));
    await patch(second, 0, bytes);
    const answer = await finish(second);
    expect(answer.status).toBe(200);
    expect(await answer.json()).toMatchObject({
      kind: 'duplicate',
      name: 'first.edf',
      participant: 'P07',
    });
  });

  it('above the limit is refused before a byte is sent', async () => {
    const response = await create(config.uploadLimitBytes + 1);
    expect(response.status).toBe(413);
    expect(await response.json()).toMatchObject({ code: 'too-large' });
  });

  it('cannot grow beyond the length it was announced with', async () => {
    const id = idOf(await create(10));
    expect((await patch(id, 0, new Uint8Array(11))).status).toBe(413);
  });

  it('must say its length beforehand', async () => {
    const response = await call('POST', '', { headers: { 'Upload-Defer-Length': '1' } });
    expect(response.status).toBe(501);
  });

  it('into a study of another team finds no such study', async () => {
    const other = await openLab(db);
    expect((await create(100, { studyId: other.studyId })).status).toBe(404);
    expect((await create(100, { studyId: 'no-uuid' })).status).toBe(404);
    await other.close();
  });

  it('is nobody else’s, neither another team’s nor a colleague’s', async () => {
    const id = idOf(await create(100));
    const other = await openLab(db);
    const colleague = await makeColleague(db, lab.member.teamId, 'researcher');
    // Also not the same person's who acts for another team.
    const elsewhere = { ...lab.member, teamId: other.member.teamId };
    for (const member of [other.member, colleague, elsewhere]) {
      expect((await call('HEAD', id, { member })).status).toBe(404);
      expect((await patch(id, 0, new Uint8Array(5), { member })).status).toBe(404);
      expect((await call('DELETE', id, { member })).status).toBe(404);
      expect((await finish(id, {}, { member })).status).toBe(404);
    }
    expect((await call('HEAD', id, {})).headers.get('upload-offset')).toBe('0');
    await other.close();
  });

  it('is refused to the signed-out and to who may only read', async () => {
    const viewer = await makeColleague(db, lab.member.teamId, 'viewer');
    const statistician = await makeColleague(db, lab.member.teamId, 'statistician');
    expect((await create(100, { member: null })).status).toBe(401);
    expect((await create(100, { member: viewer })).status).toBe(403);
    expect((await create(100, { member: statistician })).status).toBe(403);
  });

  it('that is no EDF is given up with a reason, and leaves nothing behind', async () => {
    const bytes = new TextEncoder().encode('hello '.repeat(100));
    const id = idOf(await create(bytes.length));
    await patch(id, 0, bytes);
    const answer = await finish(id);
    expect(answer.status).toBe(422);
    expect(await answer.json()).toMatchObject({ code: 'unreadable' });
    expect((await call('HEAD', id, {})).status).toBe(404);
  });

  it('waits when only its sidecar or participant is wrong', async () => {
    const bytes = smallBytes({ startedAt: '2021-01-01T00:00:00' });
    const id = idOf(await create(bytes.length));
    await patch(id, 0, bytes);
    const events = { name: 'rest_events.tsv', text: 'onset\tduration\nsoon\t1' };
    expect((await finish(id, { sidecars: { events } })).status).toBe(422);
    expect((await finish(id, { participant: 'Jane Doe' })).status).toBe(400);
    expect((await finish(id)).status).toBe(201);
  });

  it('can be given up by whoever began it', async () => {
    const id = idOf(await create(100));
    expect((await call('DELETE', id, {})).status).toBe(204);
    expect((await call('HEAD', id, {})).status).toBe(404);
  });

  it('that was not finished within a day is cleaned', async () => {
    const studyId = await makeStudy(db, lab.member);
    const [old, fresh] = [
      idOf(await create(100, { studyId })),
      idOf(await create(100, { studyId })),
    ];
    const kept = (await uploadStore.configstore.get(old))!;
    kept.creation_date = new Date(Date.now() - 25 * 60 * 60 * 1000).toISOString();
    await uploadStore.configstore.set(old, kept);
    await uploadStore.deleteExpired();
    expect((await call('HEAD', old, {})).status).toBe(404);
    expect((await call('HEAD', fresh, {})).status).toBe(200);
  });
});
