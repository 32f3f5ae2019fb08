import { newRule, type RuleDraft } from '$lib/model/plan-draft';
import type { StudyRecording } from '$lib/model/study-recording';

function ruleOf(kind: RuleDraft['kind'], recording: StudyRecording | undefined): RuleDraft[] {
  if (!recording) return [];
  const toS = String(Math.floor(recording.durationS));
  return [{ ...newRule(kind, recording.sha256), toS }];
}

/**
 * Where the rules of A and B begin for a participant: events of the first recording that has two
 * labels to set against each other, otherwise evenly spaced epochs of two recordings.
 */
export function firstRules(recordings: readonly StudyRecording[]): [RuleDraft[], RuleDraft[]] {
  const task = recordings.find(
    ({ events }) => new Set(events.map((event) => event.label)).size >= 2,
  );
  if (task) return [ruleOf('events', task), ruleOf('events', task)];
  const [first, second = first] = recordings;
  return [ruleOf('even', first), ruleOf('even', second)];
}
