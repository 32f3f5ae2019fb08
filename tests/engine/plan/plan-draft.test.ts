import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { planHash, planSchema, type Plan } from '$engine';
import { newDraft, planDraftSchema, planToDraft } from '$lib/model/plan-draft';
import { draftToPlan } from '$lib/model/plan-parse';
import { arbitraryPlan } from './arbitrary-plan';

const namesOf = (plan: Plan) => new Map(plan.recordings.map((each) => [each.sha256, each.name]));

/** The same value with the keys of every object in another order. */
function withKeysTurned<T>(value: T, turn: number): T {
  if (Array.isArray(value)) return value.map((item: unknown) => withKeysTurned(item, turn)) as T;
  if (typeof value !== 'object' || value === null) return value;
  const entries = Object.entries(value).map(([key, item]) => [key, withKeysTurned(item, turn)]);
  const cut = Math.abs(turn) % (entries.length || 1);
  return Object.fromEntries([...entries.slice(cut), ...entries.slice(0, cut)].reverse()) as T;
}

describe('plan drafts', () => {
  it('round-trips every valid plan through the form without changing a bit', () => {
    fc.assert(
      fc.property(arbitraryPlan, (plan) => {
        expect(planSchema.parse(plan)).toEqual(plan);
        const draft = planToDraft(plan);
        expect(planDraftSchema.safeParse(draft).success).toBe(true);
        expect(draftToPlan(draft, namesOf(plan))).toEqual({ plan, issues: [] });
      }),
    );
  });

  it('keeps its hash whatever the order of keys, and changes it with any value', async () => {
    await fc.assert(
      fc.asyncProperty(arbitraryPlan, fc.integer(), async (plan, turn) => {
        const hash = await planHash(plan);
        expect(hash).toMatch(/^[0-9a-f]{64}$/);
        expect(await planHash(withKeysTurned(plan, turn))).toBe(hash);
        const seed = `${plan.test.seed}x`;
        expect(await planHash({ ...plan, test: { ...plan.test, seed } })).not.toBe(hash);
      }),
    );
  });

  it('reports an empty draft field by field and never throws', () => {
    const parsed = draftToPlan(newDraft('', 'tide-2'), new Map());
    const fields = parsed.issues.map((issue) => issue.field);
    expect(fields).toEqual(
      expect.arrayContaining([
        'question',
        'participant',
        'recordings',
        'a.name',
        'a.rules',
        'sites',
      ]),
    );
    for (const issue of parsed.issues) expect(issue.message).toMatch(/^[A-Z].*\.$/);
  });

  const numberFields: [string, (plan: Plan, text: string) => ReturnType<typeof planToDraft>][] = [
    ['epoch.fromS', (plan, text) => edit(plan, (draft) => (draft.epoch.fromS = text))],
    ['epoch.toS', (plan, text) => edit(plan, (draft) => (draft.epoch.toS = text))],
    ['epoch.reject.aboveUv', (plan, text) => edit(plan, (draft) => (draft.epoch.aboveUv = text))],
    [
      'phase.cycles.from',
      (plan, text) =>
        edit(plan, (draft) => {
          draft.phase.method = 'morlet';
          draft.phase.typed.morlet['cycles.from'] = text;
        }),
    ],
    ['times.stepS', (plan, text) => edit(plan, (draft) => (draft.times.stepS = text))],
    ['test.alpha', (plan, text) => edit(plan, (draft) => (draft.test.alpha = text))],
    ['test.permutations', (plan, text) => edit(plan, (draft) => (draft.test.permutations = text))],
    [
      'test.clusterFormingZ',
      (plan, text) => edit(plan, (draft) => (draft.test.clusterFormingZ = text)),
    ],
  ];

  function edit(plan: Plan, change: (draft: ReturnType<typeof planToDraft>) => void) {
    const draft = planToDraft(plan);
    change(draft);
    return draft;
  }

  it.each(numberFields)('names %s and the value when it is no number', (field, change) => {
    fc.assert(
      fc.property(arbitraryPlan, fc.constantFrom('abc', '0,2', '1e', '--1', '½'), (plan, text) => {
        const parsed = draftToPlan(change(plan, text), namesOf(plan));
        expect(parsed.plan).toBeNull();
        const own = parsed.issues.filter((issue) => issue.field === field);
        expect(own).toHaveLength(1);
        expect(own[0].message).toContain(`"${text}"`);
      }),
      { numRuns: 20 },
    );
  });

  it.each([
    ['test.alpha', '0.6', 'Must be at most 0.5 (it is 0.6).'],
    ['test.permutations', '5', 'Must be at least 19 (it is 5).'],
    ['test.permutations', '100.5', 'Must be a whole number (it is 100.5).'],
    ['epoch.fromS', '−90', 'Must be at least −60 (it is −90).'],
    ['times.stepS', '0', 'Must be above 0 s (it is 0).'],
  ])('says what %s must be when it is %s', (field, text, message) => {
    const change = numberFields.find(([name]) => name === field)?.[1];
    fc.assert(
      fc.property(arbitraryPlan, (plan) => {
        const parsed = draftToPlan(change!(plan, text), namesOf(plan));
        expect(parsed.issues).toContainEqual({ field, message });
      }),
      { numRuns: 5 },
    );
  });

  it('reads a true minus, a bare point and thousands in counts', () => {
    fc.assert(
      fc.property(arbitraryPlan, (plan) => {
        const draft = planToDraft(plan);
        draft.epoch.fromS = ' −.25 ';
        draft.epoch.toS = '600';
        draft.test.permutations = '5,000';
        const parsed = draftToPlan(draft, namesOf(plan));
        expect(parsed.plan?.epoch.fromS).toBe(-0.25);
        expect(parsed.plan?.test.permutations).toBe(5000);
      }),
      { numRuns: 5 },
    );
  });

  it('names a field in every issue, whatever is broken', () => {
    const breakers: ((draft: ReturnType<typeof planToDraft>) => void)[] = [
      (draft) => (draft.a.rules = []),
      (draft) => (draft.b.name = ' '),
      (draft) => (draft.sites = ['C3']),
      (draft) => (draft.sites = ['C3', 'C3']),
      (draft) => (draft.test.corrections = []),
      (draft) => (draft.test.seed = ''),
      (draft) => (draft.question = ' '),
      (draft) => (draft.times.toS = '-1'),
      (draft) => (draft.a.rules[0].recording = ''),
      (draft) => (draft.frequencies = { ...draft.frequencies, kind: 'list', list: '' }),
      (draft) => (draft.pairs = { ...draft.pairs, kind: 'within', within: ['C3'] }),
    ];
    fc.assert(
      fc.property(arbitraryPlan, fc.constantFrom(...breakers), (plan, breakIt) => {
        const parsed = draftToPlan(edit(plan, breakIt), namesOf(plan));
        expect(parsed.issues.length).toBeGreaterThan(0);
        for (const issue of parsed.issues) {
          expect(issue.field).not.toBe('');
          expect(issue.message).toMatch(/^[A-Z].*\.$/s);
        }
      }),
    );
  });
});
