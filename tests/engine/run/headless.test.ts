import { beforeAll, describe, expect, it } from 'vitest';
import {
  bytesOf,
  factsOf,
  nullIds,
  openEdf,
  type NullId,
  type RecordingSource,
} from '../../../workers/engine';
import { runHeadless, type HeadlessResult } from '../../../workers/headless';
import { smallPlan, smallRecording } from './small-run';

const sha256 = '7'.repeat(64);
let recordings: RecordingSource[];
beforeAll(async () => {
  const source = bytesOf(smallRecording());
  const { facts } = await factsOf(await openEdf(source), { sha256, name: 'rest.edf' });
  recordings = [{ facts, source }];
});

const run = (id: NullId, pairsPerBlock: number, seed = 'tide'): Promise<HeadlessResult> => {
  const plan = smallPlan(sha256, { null: id });
  plan.test.seed = seed;
  return runHeadless(plan, recordings, { pairsPerBlock });
};

describe('runHeadless', () => {
  it.each(nullIds)('gives the same maps and digest for every block size (%s)', async (id) => {
    const [whole, ...split] = await Promise.all([run(id, 100), run(id, 1), run(id, 2)]);
    for (const other of split) {
      expect(other.outcome.digest).toBe(whole.outcome.digest);
      expect(other.maps).toEqual(whole.maps);
      expect(other.outcome.clusters).toEqual(whole.outcome.clusters);
    }
  });

  it('gives another digest for another seed', async () => {
    const [one, two] = await Promise.all([run('labels', 100), run('labels', 100, 'ebb')]);
    expect(two.outcome.digest).not.toBe(one.outcome.digest);
  });

  it('counts every epoch as kept or lost, with the reason', async () => {
    const { summary } = await run('labels', 100);
    expect(summary).toMatchObject({ keptA: 28, keptB: 26, workerCount: 1 });
    expect(summary.lost.map(({ onsetS, reason }) => [onsetS, reason])).toEqual([
      [0, 'guard-leaves-recording'],
    ]);
  });

  it('tells how far it is, pair by pair', async () => {
    const heard: [number, number][] = [];
    await runHeadless(smallPlan(sha256), recordings, {
      pairsPerBlock: 1,
      onProgress: (done, of) => heard.push([done, of]),
    });
    expect(heard).toEqual([
      [1, 3],
      [2, 3],
      [3, 3],
    ]);
  });

  it('keeps a byte of phase for every site, epoch, frequency and time', async () => {
    const { phases, summary } = await run('time-shift', 100);
    expect(phases).toHaveLength(3 * (summary.keptA + summary.keptB) * 2 * 3);
  });
});
