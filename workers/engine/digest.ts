import { canonicalJson } from './canonical';
import { ascending, countAtLeast } from './correct/distribution';
import type { ClaimMaps } from './correct/correction';
import { planParts } from './correct/plan-parts';
import { tailStatistic } from './correct/tail';
import type { Plan } from './plan';
import { ties } from './ties';
import type { Cluster, CorrectionOutcome } from './types';
import { engineVersion } from './version';

/** Kept epochs of each condition. */
export interface RunCounts {
  epochsA: number;
  epochsB: number;
  /** Block of each kept epoch, where the plan's null keeps to blocks: see null/epoch-blocks.ts. */
  blocks?: number[] | undefined;
}

/** SHA-256 of a text's UTF-8, 64 hexadecimal digits. */
export async function sha256Hex(text: string): Promise<string> {
  const hash = await globalThis.crypto.subtle.digest('SHA-256', new TextEncoder().encode(text));
  return Array.from(new Uint8Array(hash), (byte) => byte.toString(16).padStart(2, '0')).join('');
}

/** What names a locked plan: SHA-256 of its canonical JSON. */
export function planHash(plan: Plan): Promise<string> {
  return sha256Hex(canonicalJson(plan));
}

/**
 * What proves two runs equal: SHA-256 over the canonical JSON of the plan, the recordings' hashes,
 * the engine version and all counts (numerics, section 7). Counts only: they do not depend on the
 * last bits of a sum.
 */
export function runDigest(
  plan: Plan,
  counts: RunCounts,
  maps: Pick<ClaimMaps, 'upper' | 'lower' | 'z' | 'maxStatistic'>,
  claims: { clusters: Pick<Cluster, 'exceedances'>[]; corrections: CorrectionOutcome[] },
): Promise<string> {
  const sorted = ascending(maps.maxStatistic);
  const maxStatistic = Uint32Array.from(maps.z, (z) =>
    countAtLeast(sorted, tailStatistic(z, plan.test.tail) - ties.z),
  );
  return sha256Hex(
    canonicalJson({
      plan,
      recordings: plan.recordings.map((recording) => recording.sha256),
      engineVersion,
      counts: {
        epochsA: counts.epochsA,
        epochsB: counts.epochsB,
        upper: maps.upper,
        lower: maps.lower,
        maxStatistic,
        clusters: claims.clusters.map((cluster) => cluster.exceedances),
        ...partCounts(plan, claims.corrections),
      },
    }),
  );
}

/** Exceedances of the corrections that rest on a part of their own, from p = (1 + b) / (1 + m). */
function partCounts(plan: Plan, outcomes: CorrectionOutcome[]): Record<string, Uint32Array> {
  const ids = new Set<string>(planParts(plan.test).map(([id]) => id));
  return Object.fromEntries(
    outcomes
      .filter(({ id }) => ids.has(id))
      .map(({ id, adjustedP }) => [
        id,
        Uint32Array.from(adjustedP, (p) => Math.round(p * (plan.test.permutations + 1)) - 1),
      ]),
  );
}
