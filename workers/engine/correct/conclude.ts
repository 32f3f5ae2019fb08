import type { Plan } from '../plan';
import type { Axes, Outcome } from '../types';
import { runDigest, type RunCounts } from '../digest';
import { checkMaps } from './check-maps';
import type { ClaimMaps, Evidence } from './correction';
import { observedClusters } from './observed-clusters';
import { tailP } from './p-value';
import { correctionOf } from './registry';
import { tailExceedances } from './tail';

/** Everything a claim says, but for the digest. */
export type Claims = Omit<Outcome, 'digest'>;

/**
 * Draws the conclusions from a run's maps and distributions, without the digest. It needs no
 * phases and no surrogates, so that a server can repeat it from what it was sent.
 * @throws RangeError naming the map whose shape or range does not fit the plan
 */
export function concludeFrom(plan: Plan, axes: Axes, maps: ClaimMaps): Claims {
  checkMaps(plan, axes, maps);
  return judged(axes, plan.test, maps);
}

/** What each correction of a test says of maps that are known to fit. */
export function judged(axes: Axes, test: Plan['test'], maps: ClaimMaps): Claims {
  const { tail, alpha, permutations, clusterFormingZ } = test;
  const p = new Float64Array(maps.z.length);
  for (let x = 0; x < p.length; x++) {
    p[x] = tailP(tailExceedances(maps.upper[x], maps.lower[x], tail), permutations, tail);
  }
  const clusters = observedClusters(axes, maps, tail, clusterFormingZ);
  const evidence: Evidence = {
    axes,
    maps,
    tail,
    alpha,
    clusterFormingZ,
    permutations,
    p,
    clusters,
  };
  return {
    corrections: test.corrections.map((id) => correctionOf(id).judge(evidence)),
    clusters,
    p: Float32Array.from(p),
    degenerateFeatures: maps.nullSd.reduce((count, sd) => count + (sd === 0 ? 1 : 0), 0),
  };
}

/** The same with the digest that proves two runs equal (numerics, section 7). */
export async function conclude(
  plan: Plan,
  axes: Axes,
  counts: RunCounts,
  maps: ClaimMaps,
): Promise<Outcome> {
  const claims = concludeFrom(plan, axes, maps);
  return { ...claims, digest: await runDigest(plan, counts, maps, claims) };
}
