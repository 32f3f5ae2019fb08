import { PlanError } from '../errors';
import type { Plan, Rule } from '../plan';
import type { RecordingFacts } from '../types';
import { recordingOf } from './recordings';

/** A moment that a rule asks for, before anybody looked whether its samples are there. */
export interface Moment {
  recording: RecordingFacts;
  onsetS: number;
  label: string;
}

const mostEpochs = 100_000;
const slack = 1e-9;

/** All moments of a condition's rules, in the order of the rules. */
export function momentsOf(
  plan: Plan,
  condition: 'a' | 'b',
  recordings: RecordingFacts[],
): Moment[] {
  return plan[condition].rules.flatMap((rule, i) =>
    ruleMoments(rule, recordingOf(plan, recordings, rule.recording), `${condition}.rules.${i}`),
  );
}

function ruleMoments(rule: Rule, recording: RecordingFacts, field: string): Moment[] {
  if (rule.kind === 'events') {
    return recording.events
      .filter((event) => rule.labels.includes(event.label))
      .map(({ onsetS, label }) => ({ recording, onsetS, label }));
  }
  const count = Math.floor((rule.toS - rule.fromS) / rule.everyS + slack) + 1;
  if (count > mostEpochs) {
    throw new PlanError(
      `${field}.everyS`,
      `Every ${rule.everyS} s from ${rule.fromS} to ${rule.toS} s are ${count.toLocaleString('en')} epochs, and ${mostEpochs.toLocaleString('en')} are the most: space them wider.`,
    );
  }
  const label = `every ${rule.everyS} s`;
  return Array.from({ length: count }, (_, k) => ({
    recording,
    onsetS: rule.fromS + k * rule.everyS,
    label,
  }));
}
