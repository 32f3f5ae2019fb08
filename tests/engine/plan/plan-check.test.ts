import { describe, expect, it } from 'vitest';
import type { Plan } from '$engine';
import { checkPlan } from '$lib/model/plan-check';
import type { PlanDraft } from '$lib/model/plan-draft';
import { draftToPlan } from '$lib/model/plan-parse';
import { recordingNames } from '$lib/model/study-recording';
import { studyRecording, tappingDraft } from './study-recording';

function planOf(change: (draft: PlanDraft) => void = () => undefined): Plan {
  const draft = tappingDraft();
  change(draft);
  const parsed = draftToPlan(draft, recordingNames([studyRecording()]));
  if (!parsed.plan) throw new Error(JSON.stringify(parsed.issues));
  return parsed.plan;
}

describe('checkPlan', () => {
  it('finds nothing wrong with a plan that fits, and says what follows from it', () => {
    const { issues, consequences } = checkPlan(planOf(), [studyRecording()]);
    expect(issues).toEqual([]);
    expect(consequences).toMatchObject({ pairs: 3, frequencies: 14, times: 13, tests: 546 });
    expect(consequences?.epochs).toEqual({ a: 19, b: 19 });
  });

  it('counts the epochs that were screened in place of those that the events promise', () => {
    const screened = { epochs: [], lost: [] };
    const { issues } = checkPlan(planOf(), [studyRecording()], screened);
    expect(issues.map((issue) => issue.field)).toEqual(['a.rules', 'b.rules']);
  });

  it('names the remedy that fits the reason why most epochs are lost', () => {
    const long = planOf((draft) => {
      draft.epoch.fromS = '-48';
      draft.epoch.toS = '48';
    });
    const [issue] = checkPlan(long, [studyRecording()]).issues;
    expect(issue).toMatchObject({ field: 'a.rules' });
    expect(issue.message).toMatch(/shorten the window/);
  });

  it.each<[string, string, (draft: PlanDraft) => void]>([
    ['times outside the window', 'times.toS', (draft) => (draft.times.toS = '0.9')],
    [
      'a frequency at half the sampling rate',
      'phase.frequencies',
      (draft) => (draft.frequencies.toHz = '80'),
    ],
    [
      'pairs from a site that is not analysed',
      'pairs.site',
      (draft) => (draft.pairs = { ...draft.pairs, kind: 'from', from: 'P4' }),
    ],
    [
      'a reference channel that is not there',
      'epoch.reference',
      (draft) => {
        draft.epoch.reference = 'channels';
        draft.epoch.referenceSites = ['TP9'];
      },
    ],
    [
      'a span beyond the end of the recording',
      'a.rules.0.toS',
      (draft) => (draft.a.rules[0] = { ...draft.a.rules[0], kind: 'even', toS: '101' }),
    ],
  ])('puts %s beside %s', (_what, field, change) => {
    const { issues, consequences } = checkPlan(planOf(change), [studyRecording()]);
    expect(issues).toHaveLength(1);
    expect(issues[0].field).toBe(field);
    expect(issues[0].message).toMatch(/\.$/);
    expect(consequences).toBeNull();
  });
});
