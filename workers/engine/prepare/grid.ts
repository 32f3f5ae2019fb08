import { PlanError } from '../errors';
import { planLimits, type Plan } from '../plan';
import type { WindowSamples } from '../phase/layout';

/** Slack for sums of decimal steps, far below a sample at any sampling rate. */
const slack = 1e-9;

/**
 * The plan's frequencies, hertz, ascending.
 * @throws PlanError when they do not ascend or are not below half the sampling rate.
 */
export function frequenciesOf(plan: Plan, rateHz: number): number[] {
  const rule = plan.phase.frequencies;
  const list = rule.kind === 'list' ? rule.hz : gridOf(rule);
  const field = 'phase.frequencies';
  const stuck = list.findIndex((hz, i) => i > 0 && hz <= list[i - 1]);
  if (stuck > 0) {
    throw new PlanError(
      field,
      `Frequencies must rise, but ${round(list[stuck])} Hz follows ${round(list[stuck - 1])} Hz: put them in order, each once.`,
    );
  }
  const highest = list[list.length - 1];
  if (highest >= rateHz / 2) {
    throw new PlanError(
      field,
      `${round(highest)} Hz is not below half the sampling rate (${round(rateHz / 2)} Hz): lower the highest frequency.`,
    );
  }
  return list;
}

function gridOf(rule: Extract<Plan['phase']['frequencies'], { kind: 'grid' }>): number[] {
  const { fromHz, toHz, steps } = rule;
  if (steps === 1) {
    if (fromHz !== toHz) {
      throw new PlanError(
        'phase.frequencies.steps',
        `One step cannot go from ${fromHz} to ${toHz} Hz: ask for at least 2 steps, or make both the same.`,
      );
    }
    return [fromHz];
  }
  return Array.from({ length: steps }, (_, i) => {
    if (i === steps - 1) return toHz;
    const part = i / (steps - 1);
    return rule.spacing === 'log'
      ? fromHz * (toHz / fromHz) ** part
      : fromHz + (toHz - fromHz) * part;
  });
}

/**
 * Samples of the window [fromS, toS] around an event, both ends included, and the kept times'
 * places in it: t0, t0 + dt, ... <= t1, each the nearest sample (numerics, sections 1 and 2).
 * @throws PlanError when the times leave the window or two of them fall on one sample.
 */
export function windowSamples(plan: Plan, rateHz: number): WindowSamples {
  const { fromS, toS } = plan.epoch;
  const first = sampleAt(fromS, rateHz);
  const count = sampleAt(toS, rateHz) - first + 1;
  const { times } = plan;
  if (times.fromS < fromS - slack || times.toS > toS + slack) {
    throw new PlanError(
      times.fromS < fromS - slack ? 'times.fromS' : 'times.toS',
      `Times from ${times.fromS} to ${times.toS} s leave the window of ${fromS} to ${toS} s: keep them inside, or widen the window.`,
    );
  }
  const timeCount = Math.floor((times.toS - times.fromS) / times.stepS + slack) + 1;
  if (timeCount > planLimits.times) {
    throw new PlanError(
      'times.stepS',
      `A step of ${times.stepS} s makes ${timeCount.toLocaleString('en')} times, and ${planLimits.times.toLocaleString('en')} are the most: take a longer step.`,
    );
  }
  const kept = Int32Array.from(
    { length: timeCount },
    (_, k) => sampleAt(times.fromS + k * times.stepS, rateHz) - first,
  );
  if (kept.some((sample, i) => i > 0 && sample === kept[i - 1])) {
    throw new PlanError(
      'times.stepS',
      `A step of ${times.stepS} s is shorter than a sample (${round(1 / rateHz)} s at ${rateHz} Hz): take a longer step.`,
    );
  }
  return { first, count, kept };
}

/** The sample nearest to a time; halves go to the later one. Never minus zero. */
export function sampleAt(seconds: number, rateHz: number): number {
  return Math.round(seconds * rateHz) + 0;
}

function round(value: number): number {
  return Number(value.toPrecision(4));
}
