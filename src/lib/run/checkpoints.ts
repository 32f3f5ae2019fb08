import { deleteDB, openDB, type DBSchema, type IDBPDatabase } from 'idb';
import type { LostEpoch, PairBlock } from '$engine';

/**
 * What a run has finished so far, in the browser's own database, so that a reload or a crash
 * costs no more than the blocks under way. A checkpoint belongs to one run of one plan by one
 * engine version; anything else is another computation and is not taken up.
 */
const databaseName = 'nullwright-runs';

export interface RunIdentity {
  runId: string;
  planHash: string;
  engineVersion: string;
}

export interface Checkpoint {
  /** Epochs that the samples ruled out; null when the run had not come that far. */
  screened: LostEpoch[] | null;
  blocks: PairBlock[];
}

interface RunRow extends RunIdentity {
  savedAt: number;
  screened: LostEpoch[] | null;
}

interface Schema extends DBSchema {
  runs: { key: string; value: RunRow };
  /** By run and first pair. */
  blocks: { key: [string, number]; value: PairBlock };
}

/** Checkpoints nobody came back for are removed after this long. */
const keepForMs = 14 * 24 * 3600 * 1000;

export class Checkpoints {
  #database: IDBPDatabase<Schema> | null = null;
  /** Why nothing is kept, in words for the page; null while all is well. */
  trouble: string | null = null;
  readonly #onTrouble: (message: string) => void;

  private constructor(onTrouble: (message: string) => void) {
    this.#onTrouble = onTrouble;
  }

  /** Always answers: without a database the run goes on, and the page says what that means. */
  static async open(onTrouble: (message: string) => void): Promise<Checkpoints> {
    const checkpoints = new Checkpoints(onTrouble);
    await checkpoints.#attempt(async () => {
      checkpoints.#database = await openDB<Schema>(databaseName, 1, {
        upgrade(database) {
          database.createObjectStore('runs', { keyPath: 'runId' });
          database.createObjectStore('blocks');
        },
        // Signing out in another tab deletes the database; holding on would block it.
        blocking: (_current, _next, event) => (event.target as IDBDatabase).close(),
      });
      await checkpoints.#removeOld();
    });
    return checkpoints;
  }

  /** The checkpoint of exactly this run, or null. */
  async find(identity: RunIdentity): Promise<Checkpoint | null> {
    const found = await this.#attempt(async (database) => {
      const row = await database.get('runs', identity.runId);
      if (!row || row.planHash !== identity.planHash) return null;
      if (row.engineVersion !== identity.engineVersion) return null;
      const blocks = await database.getAll('blocks', blocksOf(identity.runId));
      return { screened: row.screened, blocks };
    });
    return found ?? null;
  }

  /** Is anything of this run kept here? Cheaper than `find`: reads no map. */
  async has(runId: string): Promise<boolean> {
    return (await this.#attempt((database) => database.getKey('runs', runId))) !== undefined;
  }

  async begin(identity: RunIdentity): Promise<void> {
    await this.#attempt((database) =>
      database.put('runs', { ...identity, savedAt: Date.now(), screened: null }),
    );
  }

  async saveScreening(identity: RunIdentity, screened: LostEpoch[]): Promise<void> {
    await this.#attempt((database) =>
      database.put('runs', { ...identity, savedAt: Date.now(), screened }),
    );
  }

  async saveBlock(runId: string, block: PairBlock): Promise<void> {
    await this.#attempt((database) => database.put('blocks', block, [runId, block.firstPair]));
  }

  async remove(runId: string): Promise<void> {
    await this.#attempt((database) => removeRun(database, runId));
  }

  close(): void {
    this.#database?.close();
    this.#database = null;
  }

  async #removeOld(): Promise<void> {
    await this.#attempt(async (database) => {
      const rows = await database.getAll('runs');
      const old = rows.filter((row) => row.savedAt < Date.now() - keepForMs);
      for (const row of old) await removeRun(database, row.runId);
    });
  }

  async #attempt<T>(
    action: (database: IDBPDatabase<Schema>) => Promise<T>,
  ): Promise<T | undefined> {
    if (this.trouble !== null) return undefined;
    try {
      return await action(this.#database as IDBPDatabase<Schema>);
    } catch (thrown) {
      this.close();
      this.trouble = describe(thrown);
      this.#onTrouble(this.trouble);
      return undefined;
    }
  }
}

/** Signing out on a machine that may be shared: what was computed leaves with the recordings. */
export async function clearCheckpoints(): Promise<void> {
  if (typeof indexedDB !== 'undefined') await deleteDB(databaseName).catch(() => undefined);
}

const blocksOf = (runId: string): IDBKeyRange =>
  IDBKeyRange.bound([runId, 0], [runId, Number.MAX_SAFE_INTEGER]);

async function removeRun(database: IDBPDatabase<Schema>, runId: string): Promise<void> {
  const transaction = database.transaction(['runs', 'blocks'], 'readwrite');
  await Promise.all([
    transaction.objectStore('runs').delete(runId),
    transaction.objectStore('blocks').delete(blocksOf(runId)),
    transaction.done,
  ]);
}

function describe(thrown: unknown): string {
  const full = thrown instanceof DOMException && thrown.name === 'QuotaExceededError';
  return full
    ? 'This browser gives no more room for checkpoints. The run goes on, but a reload would begin it anew. Free some disk space to have checkpoints again.'
    : 'This browser keeps no checkpoints (private windows often do not). The run goes on, but a reload would begin it anew.';
}
