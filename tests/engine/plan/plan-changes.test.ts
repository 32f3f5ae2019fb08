import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Plan } from '$engine';
import { planChanges, planInWords } from '$lib/model/plan-changes';
import { draftToPlan } from '$lib/model/plan-parse';
import { arbitraryPlan } from './arbitrary-plan';
import { sha256, tappingDraft } from './study-recording';

function tappingPlan(): Plan {
  const { plan } = draftToPlan(tappingDraft(), new Map([[sha256, 'tapping.edf']]));
  if (!plan) throw new Error('the draft of this test is no plan');
  return plan;
}

describe('planChanges', () => {
  it('finds no change between a plan and itself', () => {
    fc.assert(
      fc.property(arbitraryPlan, (plan) => {
        expect(planChanges(plan, structuredClone(plan))).toEqual([]);
      }),
      { numRuns: 30 },
    );
  });

  it('says each changed choice in words, before and after', () => {
    const now = tappingPlan();
    now.epoch.toS = 0.9;
    now.epoch.reject.aboveUv = null;
    now.pairs = { kind: 'from', site: 'C3' };
    now.test.tail = 'a-greater';
    expect(planChanges(tappingPlan(), now)).toEqual([
      { field: 'epoch.toS', name: 'Window, to', before: '0.8 s', after: '0.9 s' },
      {
        field: 'epoch.reject.aboveUv',
        name: 'Leave out above',
        before: '150 µV',
        after: 'not used',
      },
      { field: 'pairs', name: 'Pairs', before: 'all', after: 'from C3' },
      { field: 'test.tail', name: 'Tail', before: 'two-sided', after: 'more in A' },
    ]);
  });

  it('misses no top-level part of a plan', () => {
    const covered = new Set(planInWords(tappingPlan()).map(({ field }) => field.split('.')[0]));
    const parts = Object.keys(tappingPlan()).filter((key) => key !== 'format');
    expect([...covered].sort()).toEqual(parts.sort());
  });

  it('notices a change of any single value that a plan fixes', () => {
    const plan = tappingPlan();
    const leaves = (value: unknown, path: (string | number)[]): (string | number)[][] =>
      typeof value === 'object' && value !== null
        ? Object.entries(value).flatMap(([key, item]) => leaves(item, [...path, key]))
        : [path];
    for (const path of leaves(plan, []).filter(([top]) => top !== 'format')) {
      const copy: Record<string | number, never> = structuredClone(plan) as never;
      const parent = path.slice(0, -1).reduce((at, key) => at[key], copy);
      const key = path.at(-1)!;
      (parent as Record<string | number, unknown>)[key] = otherThan(parent[key]);
      const words = (changed: unknown) => planChanges(plan, changed as Plan);
      // A registry does not know made-up ids; what matters is that they are not passed over.
      expect(() => {
        if (words(copy).length === 0) throw new Error('silent');
      }, path.join('.')).not.toThrow('silent');
    }
  });
});

function otherThan(value: unknown): unknown {
  return typeof value === 'number' ? value + 1 : `${String(value)}x`;
}
