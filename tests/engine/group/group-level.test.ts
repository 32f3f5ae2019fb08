import { describe, expect, test } from 'vitest';
import {
  clopperPearson,
  correctionIds,
  groupLevel,
  type GroupDesign,
  type GroupInput,
} from '../../../workers/engine';
import { permutationGenerator } from '../../../workers/engine/null/random';
import { gridAxes, groupTest, participantsOf } from './cases';

const axes = gridAxes(2, 3, 4);
const cells = 24;

/** Noise of about unit variance (the sum of uniform numbers), the same for the same seed. */
function noise(seed: string, count: number): number[][] {
  const { below } = permutationGenerator(seed, 'noise', 0);
  const uniform = () => below(1_000_000) / 1_000_000;
  const normal = () => Array.from({ length: 12 }, uniform).reduce((sum, value) => sum + value) - 6;
  return Array.from({ length: count }, () => Array.from({ length: cells }, normal));
}

const paired = { kind: 'paired' } as const;
const halves = (count: number, first: number): GroupDesign => ({
  kind: 'between',
  inFirst: Array.from({ length: count }, (_, i) => i < first),
  variance: 'unequal',
});

const run = (rows: number[][], design: GroupDesign, change: Partial<GroupInput['test']> = {}) =>
  groupLevel({
    axes,
    participants: participantsOf(rows),
    design,
    test: groupTest({ permutations: 499, corrections: [...correctionIds], ...change }),
  });

/** A 2 x 2 cluster at the same points of both pairs, which share a site. */
const planted = (rows: number[][], sizeOf: (participant: number) => number) =>
  rows.map((row, i) =>
    row.map((value, x) => value + ([1, 2, 5, 6].includes(x % 12) ? sizeOf(i) : 0)),
  );

describe('the group level', () => {
  test.each([
    ['over one sample', paired, () => 3],
    ['between groups', halves(14, 6), (i: number) => (i < 6 ? 3 : 0)],
  ])('finds what was planted %s, in its place and sign', (_, design, sizeOf) => {
    const rows = planted(noise('planted', 14), sizeOf);
    const { corrections, clusters } = run(rows, design, {
      clusterFormingZ: 3,
      permutations: 1999,
    });
    expect(new Set(clusters.slice(0, 2).map(({ pair, sign }) => [pair, sign].join()))).toEqual(
      new Set(['0,1', '1,1']),
    );
    for (const { id, edges } of corrections) {
      for (const pair of [0, 1]) {
        expect(
          edges.some((edge) => edge.pair === pair && edge.z > 3),
          id,
        ).toBe(true);
      }
      for (const edge of edges) expect(edge).not.toHaveProperty('lagARad');
    }
  });

  test('turns its sign with the maps, and with the groups', () => {
    const rows = noise('turn', 8);
    const turned = run(
      rows.map((row) => row.map((value) => -value)),
      paired,
    );
    const [plain, swapped] = [halves(8, 3), halves(8, 3)];
    if (swapped.kind === 'between') swapped.inFirst = swapped.inFirst.map((inFirst) => !inFirst);
    for (const [one, other] of [
      [run(rows, paired), turned],
      [run(rows, plain), run(rows, swapped)],
    ] as const) {
      expect(other.t).toEqual(one.t.map((t) => -t));
      expect([other.upper, other.lower]).toEqual([one.lower, one.upper]);
      expect(other.corrections[0]!.adjustedP).toEqual(one.corrections[0]!.adjustedP);
    }
  });

  test('takes all relabellings where they are no more than asked for, else draws by the seed', () => {
    const rows = noise('draws', 9);
    const all = run(rows, paired, { permutations: 512 });
    expect(all.relabellings).toEqual({ count: 511, exact: true });
    expect(run(rows, paired, { permutations: 512, seed: 'ebb' })).toEqual(all);
    const some = run(rows, paired, { permutations: 511 });
    expect(some.relabellings).toEqual({ count: 511, exact: false });
    expect(run(rows, paired, { permutations: 511 })).toEqual(some);
    expect(run(rows, paired, { permutations: 511, seed: 'ebb' }).upper).not.toEqual(some.upper);
    // Choices of 4 of 9.
    expect(run(rows, halves(9, 4)).relabellings).toEqual({ count: 125, exact: true });
  });

  test('states no Monte Carlo error where p is exact', () => {
    const rows = planted(noise('exact', 9), () => 4);
    const [edge] = run(rows, paired, { permutations: 512 }).corrections[0]!.edges;
    expect(edge!.pInterval).toEqual([edge!.p, edge!.p]);
    const [drawn] = run(rows, paired).corrections[0]!.edges;
    expect(drawn!.pInterval[1]).toBeGreaterThan(drawn!.pInterval[0]);
  });

  test('keeps t finite and p honest where values are all zero, all equal, huge or tiny', () => {
    const flat = (value: number) =>
      Array.from({ length: 8 }, () => Array<number>(cells).fill(value));
    const zero = run(flat(0), paired);
    expect([zero.t[0], zero.p[0], zero.degenerateFeatures]).toEqual([0, 1, cells]);
    const equal = run(flat(0.3), paired);
    expect([equal.t[0], equal.p[0]]).toEqual([1000, 2 / 256]);
    const rows = noise('scale', 8);
    const { t } = run(rows, paired);
    for (const scale of [1e-12, 1e12]) {
      const scaled = run(
        rows.map((row) => row.map((value) => value * scale)),
        paired,
      ).t;
      scaled.forEach((value, x) => expect(value).toBeCloseTo(t[x]!, 4));
    }
  });

  test('refuses too few participants, other shapes and NaN, naming whom and where', () => {
    const rows = noise('refused', 6);
    expect(() => run(rows.slice(0, 1), paired)).toThrow('1 participants are given');
    expect(() => run(rows, halves(6, 5))).toThrow('1 participants are in the second group');
    expect(() => run(rows, halves(5, 2))).toThrow('inFirst has 5 entries for 6 participants');
    expect(() => run([...rows, [1, 2]], paired)).toThrow('the map of P7 has 2 values');
    rows[2]![13] = Number.NaN;
    expect(() => run(rows, paired)).toThrow('the map of P3 is NaN at F3 and P4, 8 Hz, 0.1 s');
  });

  // 400 data sets under the null; the interval is the 99.9 % binomial one around 0.05.
  test.each([
    ['sign flips', paired],
    ['group labels', halves(8, 3)],
  ])('claims anything in about 5 of 100 data sets without an effect: %s', (_, design) => {
    const sets = 400;
    const corrections = ['max-statistic', 'cluster-mass'] as const;
    const wrong = { 'max-statistic': 0, 'cluster-mass': 0 };
    for (let set = 0; set < sets; set++) {
      const found = run(noise(`null ${set}`, 8), design, {
        permutations: 99,
        corrections: [...corrections],
        clusterFormingZ: 1.5,
        seed: `set ${set}`,
      }).corrections;
      for (const id of corrections) {
        if (found.find((each) => each.id === id)!.edges.length > 0) wrong[id]++;
      }
    }
    for (const id of corrections) {
      const [low, high] = clopperPearson(wrong[id], sets, 0.999);
      expect([low <= 0.05, high >= 0.05], `${id}: ${wrong[id]} of ${sets}`).toEqual([true, true]);
    }
  });
});
