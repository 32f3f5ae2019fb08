import type { Plan } from '$engine';

/** Everything that decides which epochs the limits in µV leave out; two equal keys, one count. */
export function countKey(plan: Plan): string {
  const { recordings, a, b, epoch, sites, phase } = plan;
  return JSON.stringify([recordings, a.rules, b.rules, epoch, sites, phase]);
}

/** Everything that decides how long a run takes on one machine. */
export function timeKey(plan: Plan, counts: { a: number; b: number }, pairs: number): string {
  const { epoch, sites, phase, times, measure, measureSettings, test } = plan;
  const size = [counts, pairs, sites.length, test.permutations, test.tail, test.corrections];
  return JSON.stringify([
    size,
    epoch.fromS,
    epoch.toS,
    phase,
    times,
    measure,
    measureSettings,
    plan.null,
  ]);
}
