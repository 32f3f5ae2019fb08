import {
  consequencesOf,
  phaseMethod,
  planEpochs,
  PlanError,
  type Consequences,
  type LossReason,
  type LostEpoch,
  type Plan,
} from '$engine';
import type { PlanIssue } from './plan-issues';
import type { StudyRecording } from './study-recording';

export interface PlanCheck {
  /** What keeps the plan from being locked. */
  issues: PlanIssue[];
  /** Null when the plan does not fit its recordings, so that nothing follows from it. */
  consequences: Consequences | null;
}

/** What a rule names that its recording does not have, beside the rule. */
function ruleIssues(plan: Plan, recordings: readonly StudyRecording[]): PlanIssue[] {
  const issues: PlanIssue[] = [];
  for (const condition of ['a', 'b'] as const) {
    plan[condition].rules.forEach((rule, i) => {
      const recording = recordings.find((each) => each.sha256 === rule.recording);
      const field = `${condition}.rules.${i}`;
      if (!recording) {
        const message = 'This recording is not in the study: choose another, or upload it again.';
        issues.push({ field: `${field}.recording`, message });
        return;
      }
      if (recording.participant !== plan.participant) {
        const message = `${recording.name} is of ${recording.participant}, the plan is about ${plan.participant}: a plan takes recordings of one participant.`;
        issues.push({ field: `${field}.recording`, message });
      }
      if (rule.kind === 'events') {
        const known = new Set(recording.events.map((event) => event.label));
        const unknown = rule.labels.filter((label) => !known.has(label));
        if (unknown.length === 0) return;
        const message = `${recording.name} has no event "${unknown.join('", "')}": take it out of this rule.`;
        issues.push({ field: `${field}.labels`, message });
      } else if (rule.toS > recording.durationS) {
        const message = `${rule.toS} s is after the end of ${recording.name}, ${recording.durationS} s: end the span earlier.`;
        issues.push({ field: `${field}.toS`, message });
      }
    });
  }
  return issues;
}

/** What would bring most of the lost epochs back. */
function remedy(plan: Plan, lost: readonly LostEpoch[]): string {
  const of = (reason: LossReason) => lost.filter((epoch) => epoch.reason === reason).length;
  const [[reason, count]] = Object.entries(remedies(plan))
    .map(([key, words]) => [words, of(key as LossReason)] as const)
    .sort(([, x], [, y]) => y - x);
  return count > 0 ? reason : 'choose more events, or space them closer';
}

const remedies = (plan: Plan): Record<LossReason, string> => ({
  'guard-leaves-recording': `shorten the window, raise the lowest frequency or ${phaseMethod(plan.phase.method).shorter}: that shortens the guard`,
  'crosses-gap': 'shorten the window, so that fewer epochs cross a gap of the recording',
  'above-limit': 'raise the limit in µV, or leave the sites out that break it',
  flat: 'lower the limit for flat, or leave the flat sites out',
  'by-hand': 'take some marks back',
});

/** Without two epochs of each condition there is nothing to compare. */
function countIssues(plan: Plan, { epochs, lost }: Consequences): PlanIssue[] {
  return (['a', 'b'] as const)
    .filter((condition) => epochs[condition] < 2)
    .map((condition) => {
      const gone = lost.filter((epoch) => epoch.condition === condition);
      const count = gone.length > 0 ? `; ${gone.length} are left out` : '';
      return {
        field: `${condition}.rules`,
        message: `Needs at least 2 epochs, has ${epochs[condition]}${count}: ${remedy(plan, gone)}.`,
      };
    });
}

/**
 * Holds a plan against its recordings, in the browser and again on the server before locking.
 * `screened` are the epochs left after the limits in µV, when they have been counted.
 */
export function checkPlan(
  plan: Plan,
  recordings: readonly StudyRecording[],
  screened?: ReturnType<typeof planEpochs>,
): PlanCheck {
  const issues = ruleIssues(plan, recordings);
  if (issues.length > 0) return { issues, consequences: null };
  try {
    const consequences = consequencesOf(plan, [...recordings], screened);
    const stops = consequences.cautions.filter(
      (each) => each.severity === 'stop' && each.code !== 'too-few-epochs',
    );
    return {
      issues: [
        ...countIssues(plan, consequences),
        ...stops.map(({ message }) => ({ field: 'sites', message })),
      ],
      consequences,
    };
  } catch (error) {
    if (!(error instanceof PlanError)) throw error;
    return { issues: [{ field: error.field, message: error.message }], consequences: null };
  }
}
