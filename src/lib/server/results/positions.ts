import type { SpherePosition } from '$lib/figures/head-geometry';
import { recordingFacts } from '../recordings';
import type { Db } from '../database';

/** Where the plan's sites lie, from the first of its recordings that knows; null where none does. */
export async function sitePositions(
  db: Db,
  teamId: string,
  studyId: string,
  sha256s: string[],
  sites: readonly string[],
): Promise<(SpherePosition | null)[]> {
  const recordings = await recordingFacts(db, teamId, { studyId, sha256s });
  const known = new Map<string, SpherePosition>();
  for (const { channels } of recordings) {
    for (const { site, position } of channels) {
      if (position && !known.has(site)) known.set(site, position);
    }
  }
  return sites.map((site) => known.get(site) ?? null);
}
