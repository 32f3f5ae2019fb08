import { browser } from '$app/environment';
import { UploadQueue } from './upload-queue.svelte';

const queues = new Map<string, UploadQueue>();

/**
 * The study's queue in this tab: one, whichever page asks for it, so that sending goes on while
 * the person looks at something else. The server renders an empty one.
 */
export function uploadQueue(studyId: string, limitBytes: number): UploadQueue {
  const known = queues.get(studyId);
  if (known) return known;
  const queue = new UploadQueue(studyId, limitBytes);
  if (browser) queues.set(studyId, queue);
  return queue;
}
