import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { engineVersion } from '$engine';
import { npyParts, type NpyArray } from '$workers/engine/npy';
import { changeRun, createRun, finishRun, getRun, listRuns, receiveMap } from '$lib/server/runs';
import { makeColleague, makeMember, openDatabase } from '../contrasts/fixture';
import { openRunLab, stream, type RunLab } from './laboratory';

const db = openDatabase();
let lab: RunLab;
beforeAll(async () => {
  lab = await openRunLab(db);
});
afterAll(async () => {
  await lab.close();
  await db.destroy();
});

const asked = () => ({ planHash: lab.hash, engineVersion, workerCount: 2 });
const npy = (array: NpyArray, shape: number[]) => stream(Buffer.concat(npyParts(array, shape)));

describe('createRun', () => {
  it('starts a run with the seed of the locked plan', async () => {
    const { id } = await createRun(db, lab.member, lab.contrastId, asked());
    const run = await getRun(db, lab.member.teamId, id);
    expect(run).toMatchObject({ state: 'running', seed: 'tide', workerCount: 2, planVersion: 1 });
    const [newest] = await listRuns(db, lab.member.teamId, lab.contrastId);
    expect(newest!.id).toBe(id);
  });

  it('finds no locked plan under another hash, nor in another team', async () => {
    const other = { ...asked(), planHash: 'c'.repeat(64) };
    await expect(createRun(db, lab.member, lab.contrastId, other)).rejects.toMatchObject({
      status: 404,
    });
    const stranger = await makeMember(db);
    await expect(createRun(db, stranger, lab.contrastId, asked())).rejects.toMatchObject({
      status: 404,
    });
  });

  it('refuses a page that holds another engine', async () => {
    const old = { ...asked(), engineVersion: '0' };
    await expect(createRun(db, lab.member, lab.contrastId, old)).rejects.toMatchObject({
      status: 409,
      body: { code: 'engine-changed' },
    });
  });
});

describe('changeRun', () => {
  it('pauses, goes on and stops, and a stopped run takes nothing more', async () => {
    const id = await lab.begin();
    await changeRun(db, lab.member, id, { state: 'paused', progress: 0.4 });
    expect(await getRun(db, lab.member.teamId, id)).toMatchObject({
      state: 'paused',
      progress: 0.4,
    });
    await changeRun(db, lab.member, id, { state: 'running' });
    await changeRun(db, lab.member, id, { state: 'stopped' });
    await expect(changeRun(db, lab.member, id, { state: 'running' })).rejects.toMatchObject({
      status: 409,
    });
    await expect(lab.store(id)).rejects.toMatchObject({ status: 409 });
  });

  it('keeps the reason of a failure until the run goes on', async () => {
    const id = await lab.begin();
    await changeRun(db, lab.member, id, { state: 'failed', failure: 'a worker broke' });
    expect((await getRun(db, lab.member.teamId, id)).failure).toBe('a worker broke');
    await changeRun(db, lab.member, id, { state: 'running' });
    expect((await getRun(db, lab.member.teamId, id)).failure).toBeNull();
  });

  it('lets a colleague stop a run, but not report on it', async () => {
    const id = await lab.begin();
    const colleague = await makeColleague(db, lab.member.teamId, 'researcher');
    await expect(changeRun(db, colleague, id, { progress: 0.9 })).rejects.toMatchObject({
      status: 403,
    });
    await changeRun(db, colleague, id, { state: 'stopped' });
    expect((await getRun(db, lab.member.teamId, id)).state).toBe('stopped');
  });

  it('does not find the run of another team', async () => {
    const id = await lab.begin();
    const stranger = await makeMember(db);
    await expect(changeRun(db, stranger, id, { state: 'stopped' })).rejects.toMatchObject({
      status: 404,
    });
  });
});

describe('receiveMap', () => {
  const send = (id: string, name: string, bytes: Parameters<typeof receiveMap>[5]) =>
    receiveMap(db, lab.storage, lab.member, id, name, bytes);

  it.each([
    ['a shape that is not the plan’s', () => npy(new Float32Array(12), [2, 2, 3]), '3 x 2 x 3'],
    ['another dtype', () => npy(new Uint32Array(18), [3, 2, 3]), 'dtype <u4'],
    [
      'a file that ends early',
      () => stream(Buffer.concat(npyParts(new Float32Array(18), [3, 2, 3])).subarray(0, 150)),
      'ends after',
    ],
    [
      'a file that does not end',
      () => stream(Buffer.concat([...npyParts(new Float32Array(18), [3, 2, 3]), Buffer.alloc(9)])),
      'is longer',
    ],
    ['what is no NPY file', () => stream(Buffer.from('sites,z\nF3,2.1')), 'is no NPY file'],
    ['nothing', () => stream(Buffer.alloc(0)), 'is no NPY file'],
  ])('refuses %s', async (_what, bytes, message) => {
    const id = await lab.begin();
    await expect(send(id, 'z', bytes())).rejects.toThrow(message);
    expect(await lab.storage.exists(`staging/${id}/z.npy`)).toBe(false);
  });

  it('refuses phases of more epochs than are planned', async () => {
    const id = await lab.begin();
    const bytes = npy(new Uint8Array(3 * 60 * 6), [3, 60, 2, 3]);
    await expect(send(id, 'phases', bytes)).rejects.toThrow('3 x 54 x 2 x 3');
  });

  it('knows the maps of a run by name only', async () => {
    const id = await lab.begin();
    await expect(send(id, 'p', stream(Buffer.alloc(1)))).rejects.toMatchObject({ status: 404 });
  });

  it('takes maps from who started the run only', async () => {
    const id = await lab.begin();
    const colleague = await makeColleague(db, lab.member.teamId, 'researcher');
    const bytes = npy(new Float32Array(18), [3, 2, 3]);
    await expect(receiveMap(db, lab.storage, colleague, id, 'z', bytes)).rejects.toMatchObject({
      status: 403,
    });
  });
});

describe('finishRun', () => {
  it('names the map that has not arrived', async () => {
    const id = await lab.begin();
    const { summary } = await lab.compute();
    await expect(finishRun(db, lab.storage, lab.member, id, summary)).rejects.toMatchObject({
      code: 'map-missing',
      message: 'Map observed-a has not arrived.',
    });
  });
});
