import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { RunSummary } from '$lib/model/run';
import { checkSummary } from '$lib/server/runs/check-summary';
import { expectationOf, lockedPlan, type Expectation, type LockedPlan } from '$lib/server/runs';
import { openDatabase } from '../contrasts/fixture';
import { openRunLab, type RunLab } from './laboratory';

const db = openDatabase();
let lab: RunLab;
let locked: LockedPlan;
let expectation: Expectation;
let right: RunSummary;
beforeAll(async () => {
  lab = await openRunLab(db);
  locked = (await lockedPlan(db, lab.member.teamId, lab.contrastId))!;
  expectation = await expectationOf(db, lab.member.teamId, locked);
  right = (await lab.compute()).summary;
});
afterAll(async () => {
  await lab.close();
  await db.destroy();
});

const check = (change: Partial<RunSummary>) => () =>
  checkSummary({ ...right, ...change }, locked, expectation);

describe('the epoch counts of a result', () => {
  it('are those of the plan', () => {
    expect(check({})).not.toThrow();
  });

  it('may miss no epoch that is not listed as lost', () => {
    expect(check({ keptA: right.keptA - 1 })).toThrow(/Condition A: 27 epochs kept and 0 left out/);
    expect(check({ keptB: right.keptB + 1 })).toThrow(/Condition B: 27 epochs kept and 0 left out/);
  });

  it('take an epoch that its samples ruled out, once', () => {
    const { condition, recording, onsetS, label } = expectation.planned[0]!;
    const gone = { condition, recording, onsetS, label, reason: 'above-limit' as const };
    const lost = [...right.lost, gone];
    expect(check({ keptA: right.keptA - 1, lost })).not.toThrow();
    expect(check({ lost })).toThrow(/Condition A: 28 epochs kept and 1 left out/);
    expect(check({ keptA: right.keptA - 2, lost: [...lost, gone] })).toThrow('is lost twice');
  });
});
