import { describe, expect, it } from 'vitest';
import { chooseVersion, stageFact } from '$lib/model/stages';

const locked = {
  version: 1,
  hash: `9f3c61ab${'0'.repeat(56)}`,
  lockedAt: new Date('2026-11-24T10:00:00Z'),
};
const draft = { version: 2, hash: null, lockedAt: null };
const run = { state: 'finished' as const, progress: 1, durationS: 41.2 };
const facts = (edgeCount: number, clusterCount: number) => [
  { version: 1, permutations: 5000, run: { ...run, edgeCount, clusterCount } },
];

describe('stage facts', () => {
  it('name the plan with its lock and hash, the run with its time, the result with its edges', () => {
    expect(stageFact('define', [locked], facts(7, 2), null)).toBe(
      'plan 1, locked 24 Nov 2026, 9f3c 61ab',
    );
    expect(stageFact('run', [locked], facts(7, 2), null)).toBe('5,000 permutations, 41 s');
    expect(stageFact('result', [locked], facts(7, 2), null)).toBe('7 edges in 2 clusters');
  });

  it('say plainly when nothing survives, nothing was run, or nothing is locked', () => {
    expect(stageFact('result', [locked], facts(0, 0), null)).toBe('no edge survives');
    const unrun = [{ version: 1, permutations: 5000, run: null }];
    expect(stageFact('run', [locked], unrun, null)).toBe('5,000 permutations, not run yet');
    expect(stageFact('run', [draft], [], null)).toBe('after locking');
  });

  it('say whose they are while a newer version is on the way', () => {
    const both = [locked, draft];
    expect(stageFact('define', both, facts(1, 0), null)).toBe('plan 2, draft');
    expect(stageFact('result', both, facts(1, 0), null)).toBe('plan 1: 1 edge');
  });

  it('state how far a run that is not finished has come', () => {
    const paused = { ...run, state: 'paused' as const, progress: 0.437, durationS: null };
    const half = [
      { version: 1, permutations: 5000, run: { ...paused, edgeCount: 0, clusterCount: 0 } },
    ];
    expect(stageFact('run', [locked], half, null)).toBe('paused, 43 %');
  });
});

describe('chooseVersion', () => {
  it('shows the newest draft on Define and the newest locked plan on Run and Result', () => {
    const both = [locked, draft];
    expect(chooseVersion(both, 'define', null)).toBe(draft);
    expect(chooseVersion(both, 'run', null)).toBe(locked);
    expect(chooseVersion(both, 'result', 2)).toBe(locked);
    expect(chooseVersion(both, 'define', 1)).toBe(locked);
    expect(chooseVersion([draft], 'run', null)).toBeUndefined();
  });
});
