import { formatCount, formatDate, formatNumber, formatSeconds } from './format';

/** The pages of a contrast, in the order of the work. */
export const stages = [
  { id: 'define', name: 'Define' },
  { id: 'run', name: 'Run' },
  { id: 'result', name: 'Result' },
] as const;

export type StageId = (typeof stages)[number]['id'];

interface Version {
  version: number;
  hash: string | null;
  lockedAt: Date | null;
}

interface RunState {
  state: 'running' | 'paused' | 'stopped' | 'failed' | 'finished';
  progress: number;
  durationS: number | null;
  edgeCount: number;
  clusterCount: number;
}

interface Facts {
  version: number;
  permutations: number;
  run: RunState | null;
}

/**
 * The version a page shows: the one asked for, or by default the newest for Define and the newest
 * locked one for Run and Result. Undefined when the page has none to show.
 */
export function chooseVersion<V extends Version>(
  plans: readonly V[],
  stage: StageId,
  asked: number | null,
): V | undefined {
  const usable = stage === 'define' ? plans : plans.filter((plan) => plan.lockedAt !== null);
  return usable.find((plan) => plan.version === asked) ?? usable.at(-1);
}

/** "9f3c 61ab": enough of a hash to compare by eye. */
export function shortHash(hash: string): string {
  return `${hash.slice(0, 4)} ${hash.slice(4, 8)}`;
}

function define(plan: Version): string {
  if (!plan.lockedAt || !plan.hash) return `plan ${plan.version}, draft`;
  return `plan ${plan.version}, locked ${formatDate(plan.lockedAt)}, ${shortHash(plan.hash)}`;
}

function run(facts: Facts): string {
  const permutations = formatCount(facts.permutations, 'permutation');
  if (!facts.run) return `${permutations}, not run yet`;
  const { state, progress, durationS } = facts.run;
  if (state === 'finished') return `${permutations}, ${formatSeconds(durationS)}`;
  const percent = `${formatNumber(Math.floor(progress * 100))} %`;
  return state === 'failed' ? `failed at ${percent}` : `${state}, ${percent}`;
}

function result({ run: latest }: Facts): string {
  if (latest?.state !== 'finished') return 'nothing yet';
  if (latest.edgeCount === 0) return 'no edge survives';
  const edges = formatCount(latest.edgeCount, 'edge');
  if (latest.clusterCount === 0) return edges;
  return `${edges} in ${formatCount(latest.clusterCount, 'cluster')}`;
}

/** The fact below each stage's name, for the version that its page shows. */
export function stageFact(
  stage: StageId,
  plans: readonly Version[],
  facts: readonly Facts[],
  asked: number | null,
): string {
  const plan = chooseVersion(plans, stage, asked);
  if (stage === 'define') return plan ? define(plan) : 'no plan';
  const own = facts.find((each) => each.version === plan?.version);
  if (!plan || !own) return stage === 'run' ? 'after locking' : 'nothing yet';
  const words = stage === 'run' ? run(own) : result(own);
  const newest = plans.at(-1)?.version;
  // With a newer version on the way, the fact must say whose it is.
  return plan.version === newest && asked === null ? words : `plan ${plan.version}: ${words}`;
}
