import { PlanError } from '../errors';
import { planLimits, type PairRule } from '../plan';
import { listed } from './recordings';

/**
 * Pairs of indices into `sites`, j before k, in the plan's order.
 * @throws PlanError when the rule names a site that is not analysed, or makes no pair.
 */
export function pairsOf(rule: PairRule, sites: string[]): [number, number][] {
  const chosen = chooser(rule, sites);
  const pairs: [number, number][] = [];
  for (let j = 0; j < sites.length; j++) {
    for (let k = j + 1; k < sites.length; k++) {
      if (chosen(sites[j], sites[k])) pairs.push([j, k]);
    }
  }
  if (pairs.length === 0) {
    throw new PlanError('pairs', 'These groups of sites make no pair: choose two different sites.');
  }
  return pairs;
}

function chooser(rule: PairRule, sites: string[]): (j: string, k: string) => boolean {
  switch (rule.kind) {
    case 'all':
      return () => true;
    case 'within': {
      const group = known(rule.sites, sites, 'pairs.sites');
      return (j, k) => group.has(j) && group.has(k);
    }
    case 'between': {
      const first = known(rule.first, sites, 'pairs.first');
      const second = known(rule.second, sites, 'pairs.second');
      return (j, k) => (first.has(j) && second.has(k)) || (first.has(k) && second.has(j));
    }
    case 'from': {
      const [site] = known([rule.site], sites, 'pairs.site');
      return (j, k) => j === site || k === site;
    }
  }
}

function known(names: string[], sites: string[], field: string): Set<string> {
  const missing = names.filter((name) => !sites.includes(name));
  if (missing.length > 0) {
    throw new PlanError(
      field,
      `Pairs name ${listed(missing)}, not among the sites of this plan: add ${missing.length > 1 ? 'them' : 'it'} to the sites, or choose others.`,
    );
  }
  return new Set(names);
}

/** Refuses more features than a run can hold, naming the numbers that make them. */
export function assertFeatures(pairs: number, frequencies: number, times: number): void {
  const features = pairs * frequencies * times;
  if (features > planLimits.features) {
    const count = (value: number) => value.toLocaleString('en');
    throw new PlanError(
      'pairs',
      `${count(pairs)} pairs × ${frequencies} frequencies × ${times} times are ${count(features)} tests, and ${count(planLimits.features)} are the most: take fewer pairs, frequencies or times.`,
    );
  }
}
