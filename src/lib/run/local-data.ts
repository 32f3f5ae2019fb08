import { clearCheckpoints } from './checkpoints';
import { clearCache } from './recording-cache';

/**
 * Removes what this browser keeps of recordings and unfinished runs. Called on signing out: they
 * are health data, and the machine may be shared. Never throws.
 */
export async function clearLocalData(): Promise<void> {
  await Promise.all([clearCache(), clearCheckpoints()]);
}
