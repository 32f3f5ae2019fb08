import { join } from 'node:path';
import { FileStore } from '@tus/file-store';
import { MemoryLocker } from '@tus/server';
import { config } from '../config';
import { log } from '../log';

const dayMs = 24 * 60 * 60 * 1000;
const hourMs = 60 * 60 * 1000;

/** Uploads under way: the bytes that have arrived, and a JSON file beside each. */
export const uploadStore = new FileStore({
  directory: join(config.dataDir, 'uploads'),
  expirationPeriodInMilliseconds: dayMs,
});
// Without it, a client must say how large its file is before it sends any of it.
uploadStore.extensions = uploadStore.extensions.filter((name) => name !== 'creation-defer-length');

/** One for all requests: two of them never write to the same upload. */
export const uploadLocker = new MemoryLocker();

let lastCleaning = 0;

/** Removes what has not been finished within a day; looks at most once an hour. */
export async function cleanUploads(now = Date.now()): Promise<void> {
  if (now - lastCleaning < hourMs) return;
  lastCleaning = now;
  try {
    const removed = await uploadStore.deleteExpired();
    if (removed > 0) log.info({ removed }, 'unfinished uploads removed');
  } catch (reason) {
    log.warn({ err: reason }, 'unfinished uploads could not all be removed');
  }
}
