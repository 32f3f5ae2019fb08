import { engineVersion, epochKey, type Epoch } from '$engine';
import type { RunSummary } from '$lib/model/run';
import type { Expectation, LockedPlan } from './context';
import { ResultRefused } from './refused';

/** Limits in microvolts need the samples; only these losses are the browser's to report. */
const seenInSamples = new Set(['above-limit', 'flat']);

/**
 * Holds what a browser says of its run against the plan and the database's facts.
 * @throws ResultRefused with the first thing that does not fit.
 */
export function checkSummary(
  summary: RunSummary,
  locked: LockedPlan,
  expectation: Expectation,
): void {
  if (summary.planHash !== locked.hash) {
    throw new ResultRefused(
      'plan-mismatch',
      `The result is of plan ${summary.planHash.slice(0, 8)}, the run of ${locked.hash.slice(0, 8)}.`,
    );
  }
  if (summary.engineVersion !== engineVersion) {
    throw new ResultRefused(
      'engine-mismatch',
      `The result is of engine ${summary.engineVersion}, this server's is ${engineVersion}.`,
    );
  }
  checkEpochs(summary, expectation);
  const { permutations } = locked.plan.test;
  checkDistribution('maxStatistic', summary.maxStatistic, permutations, locked);
  checkDistribution('clusterMass', summary.clusterMass, permutations, null);
}

function checkEpochs(summary: RunSummary, { planned, lost }: Expectation): void {
  const plannedKeys = new Map(planned.map((epoch) => [epochKey(epoch), epoch]));
  const lostKeys = new Map(lost.map((epoch) => [epochKey(epoch), epoch]));
  const seen = new Set<string>();
  const screened = { a: 0, b: 0 };
  for (const epoch of summary.lost) {
    const key = epochKey(epoch);
    const where = `The epoch at ${epoch.onsetS} s (condition ${epoch.condition.toUpperCase()})`;
    if (seen.has(key)) throw new ResultRefused('epochs-mismatch', `${where} is lost twice.`);
    seen.add(key);
    const byFacts = lostKeys.get(key)?.reason;
    const fits = byFacts
      ? byFacts === epoch.reason
      : plannedKeys.has(key) && seenInSamples.has(epoch.reason);
    if (!fits) {
      throw new ResultRefused(
        'epochs-mismatch',
        `${where} is reported lost as "${epoch.reason}", which the recording's facts do not bear out.`,
      );
    }
    if (!byFacts) screened[epoch.condition] += 1;
  }
  const missing = lost.find((epoch) => !seen.has(epochKey(epoch)));
  if (missing) {
    throw new ResultRefused(
      'epochs-mismatch',
      `The epoch at ${missing.onsetS} s must be lost (${missing.reason}), but is not listed.`,
    );
  }
  checkKept('A', summary.keptA, countOf(planned, 'a'), screened.a);
  checkKept('B', summary.keptB, countOf(planned, 'b'), screened.b);
}

function checkKept(name: string, kept: number, planned: number, screened: number): void {
  if (kept + screened !== planned) {
    throw new ResultRefused(
      'epochs-mismatch',
      `Condition ${name}: ${kept} epochs kept and ${screened} left out for their samples are not the ${planned} planned.`,
    );
  }
}

/** `locked` given: a one-sided maximum may be negative; a largest mass never is. */
function checkDistribution(
  field: string,
  values: number[],
  permutations: number,
  locked: LockedPlan | null,
): void {
  if (values.length !== permutations) {
    throw new ResultRefused(
      'distribution-wrong',
      `${field} holds ${values.length} values; the plan has ${permutations} permutations.`,
    );
  }
  const mayBeNegative = locked !== null && locked.plan.test.tail !== 'two-sided';
  const bad = values.findIndex((value) => !Number.isFinite(value) || (value < 0 && !mayBeNegative));
  if (bad >= 0) {
    throw new ResultRefused(
      'distribution-wrong',
      `${field}[${bad}] is ${values[bad]}; it must be a finite number${mayBeNegative ? '' : ' of at least 0'}.`,
    );
  }
}

const countOf = (epochs: Epoch[], condition: 'a' | 'b'): number =>
  epochs.filter((epoch) => epoch.condition === condition).length;
