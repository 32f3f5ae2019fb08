import { PlanError } from '../errors';
import type { Plan } from '../plan';
import { guardSamples } from '../phase/guard';
import type { Condition, Epoch, LossReason, LostEpoch, RecordingFacts, Segment } from '../types';
import { axesOf } from './axes';
import { sampleAt, windowSamples } from './grid';
import { momentsOf, type Moment } from './moments';

/** Samples that an epoch needs before and after its event, guard included. */
export interface Reach {
  before: number;
  after: number;
  rateHz: number;
}

interface Placed {
  segment: number;
  sample: number;
}

/**
 * Which epochs the metadata allow, all of A before all of B and each in the order of the plan's
 * recordings and of time; and which they do not, with the reason. An event that a condition's rules
 * take twice makes one epoch. Pure; reads no samples (see `screenEpochs` for limits in uV).
 * @throws PlanError when the plan does not fit the recordings, or one event is in A and in B.
 */
export function planEpochs(
  plan: Plan,
  recordings: RecordingFacts[],
): { epochs: Epoch[]; lost: LostEpoch[] } {
  const reach = reachOf(plan, recordings);
  const moments = {
    a: ordered(plan, momentsOf(plan, 'a', recordings), reach),
    b: ordered(plan, momentsOf(plan, 'b', recordings), reach),
  };
  refuseShared(moments, reach);
  const epochs: Epoch[] = [];
  const lost: LostEpoch[] = [];
  for (const condition of ['a', 'b'] as const) {
    for (const moment of moments[condition]) {
      const { recording, onsetS, label } = moment;
      const base = { condition, recording: recording.sha256, onsetS, label };
      const placed = place(plan, moment, reach);
      if (typeof placed === 'string') lost.push({ ...base, reason: placed });
      else epochs.push({ ...base, ...placed });
    }
  }
  return { epochs, lost };
}

/** Samples each epoch needs around its event by the plan's window and guard. */
export function reachOf(plan: Plan, recordings: RecordingFacts[]): Reach {
  const { frequenciesHz, samplingRateHz: rateHz } = axesOf(plan, recordings);
  const guard = guardSamples(plan.phase, frequenciesHz, rateHz);
  const { first, count } = windowSamples(plan, rateHz);
  return { before: guard - first, after: first + count - 1 + guard, rateHz };
}

/** By recording and time, each sample once. */
function ordered(plan: Plan, moments: Moment[], reach: Reach): Moment[] {
  const rank = new Map(plan.recordings.map(({ sha256 }, i) => [sha256, i]));
  const sorted = [...moments].sort(
    (a, b) => rank.get(a.recording.sha256)! - rank.get(b.recording.sha256)! || a.onsetS - b.onsetS,
  );
  const seen = new Set<string>();
  return sorted.filter((moment) => {
    const key = keyOf(moment, reach);
    if (seen.has(key)) return false;
    seen.add(key);
    return true;
  });
}

function keyOf({ recording, onsetS }: Moment, reach: Reach): string {
  return `${recording.sha256}/${sampleAt(onsetS, reach.rateHz)}`;
}

function refuseShared(moments: Record<Condition, Moment[]>, reach: Reach): void {
  const inA = new Set(moments.a.map((moment) => keyOf(moment, reach)));
  const shared = moments.b.filter((moment) => inA.has(keyOf(moment, reach)));
  if (shared.length > 0) {
    const { label, onsetS, recording } = shared[0];
    const others = shared.length > 1 ? ` and ${shared.length - 1} more` : '';
    throw new PlanError(
      'b.rules',
      `The event ${label} at ${Number(onsetS.toFixed(3))} s of ${recording.name}${others} would be in A and in B: an epoch can have one label only, so change one of the rules.`,
    );
  }
}

function place(plan: Plan, moment: Moment, reach: Reach): Placed | LossReason {
  const { recording, onsetS } = moment;
  const half = 0.5 / reach.rateHz;
  const marked = plan.epoch.reject.byHand.some(
    (mark) => mark.recording === recording.sha256 && Math.abs(mark.onsetS - onsetS) <= half,
  );
  if (marked) return 'by-hand';
  const { segments } = recording;
  const segment = lastBegun(segments, onsetS, reach.rateHz);
  if (segment < 0) return 'guard-leaves-recording';
  const { startS, durationS } = segments[segment];
  const sample = sampleAt(onsetS - startS, reach.rateHz);
  const count = sampleAt(durationS, reach.rateHz);
  const early = sample - reach.before < 0;
  const late = sample + reach.after >= count;
  if (!early && !late) return { segment, sample };
  const gap = (early && segment > 0) || (late && segment < segments.length - 1);
  return gap ? 'crosses-gap' : 'guard-leaves-recording';
}

/** The last segment whose first sample is not after the event; -1 before the first. */
function lastBegun(segments: Segment[], onsetS: number, rateHz: number): number {
  let low = 0;
  let high = segments.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (sampleAt(onsetS - segments[middle].startS, rateHz) >= 0) low = middle + 1;
    else high = middle;
  }
  return low - 1;
}
