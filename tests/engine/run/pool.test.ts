import { describe, expect, test } from 'vitest';
import type { EngineWorkerApi } from '../../../workers/protocol';
import { PoolError } from '../../../workers/run/pool-error';
import { WorkerPool } from '../../../workers/run/pool';

/** A pool of stand-ins; `breaks` ends the newest worker of a seat as a crash does. */
function pool(size: number, maxRestarts = 3) {
  const opened: { id: number; onBroken: (reason: string) => void; ended: boolean }[] = [];
  const workers = new WorkerPool({
    size,
    maxRestarts,
    createWorker(onBroken) {
      const worker = { id: opened.length, onBroken, ended: false };
      opened.push(worker);
      // The tasks below never call the engine; they only ask which worker they got.
      const api = { id: worker.id } as unknown as EngineWorkerApi;
      return { api, terminate: () => void (worker.ended = true) };
    },
  });
  return { workers, opened };
}

const idOf = (api: EngineWorkerApi): number => (api as unknown as { id: number }).id;
const never = () => new Promise<never>(() => undefined);

describe('a pool', () => {
  test('gives each part to a free worker and keeps the rest waiting', async () => {
    const { workers } = pool(2);
    const asked: number[] = [];
    const parts = Array.from({ length: 5 }, (_, part) =>
      workers.run(async (api) => {
        asked.push(idOf(api));
        return part;
      }),
    );
    expect(asked).toEqual([0, 1]);
    expect(await Promise.all(parts)).toEqual([0, 1, 2, 3, 4]);
    expect(asked).toHaveLength(5);
  });

  test('does the part of a broken worker again on a fresh one', async () => {
    const { workers, opened } = pool(1);
    const part = workers.run((api) => (idOf(api) === 0 ? never() : Promise.resolve(idOf(api))));
    opened[0]!.onBroken('out of memory');
    expect(await part).toBe(1);
    expect(opened[0]!.ended).toBe(true);
    // A worker that broke tells of its end too: that is no second crash.
    opened[0]!.onBroken('it ended');
    expect(opened).toHaveLength(2);
  });

  test('fails with the reason once its workers broke too often', async () => {
    const { workers, opened } = pool(1, 1);
    const part = workers.run(never);
    opened[0]!.onBroken('out of memory');
    opened[1]!.onBroken('out of memory');
    await expect(part).rejects.toThrow(
      'Workers broke 2 times, the last time because out of memory',
    );
    await expect(workers.run(never)).rejects.toMatchObject({ code: 'worker-crashed' });
  });

  test("passes on the engine's own error as it is, and goes on", async () => {
    const { workers } = pool(1);
    const refusal = new RangeError('C3 is flat');
    await expect(workers.run(() => Promise.reject(refusal))).rejects.toBe(refusal);
    expect(await workers.run(() => Promise.resolve('next'))).toBe('next');
  });

  test('begins no part while paused, and ends all that wait when it ends', async () => {
    const { workers, opened } = pool(1);
    const running = workers.run(never);
    workers.pause();
    let begun = false;
    const waiting = workers.run(async () => void (begun = true));
    workers.end();
    for (const part of [running, waiting]) {
      await expect(part).rejects.toBeInstanceOf(PoolError);
      await expect(part).rejects.toMatchObject({ code: 'cancelled' });
    }
    expect([begun, opened[0]!.ended]).toEqual([false, true]);
  });
});
