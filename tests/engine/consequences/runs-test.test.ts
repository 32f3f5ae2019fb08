import { describe, expect, test } from 'vitest';
import { countRuns, runsDistribution, runsTest } from '../../../workers/engine/numbers/runs-test';

const labels = (text: string) => [...text].map((letter) => letter === 'A');

/** Every order of a labels A and b labels B, by recursion. */
function orders(a: number, b: number): boolean[][] {
  if (a + b === 0) return [[]];
  return [
    ...(a > 0 ? orders(a - 1, b).map((rest) => [true, ...rest]) : []),
    ...(b > 0 ? orders(a, b - 1).map((rest) => [false, ...rest]) : []),
  ];
}

describe('runsTest', () => {
  test.each([
    [5, 6],
    [1, 4],
    [7, 3],
  ])('equals full enumeration for %i and %i labels', (a, b) => {
    const all = orders(a, b);
    runsDistribution(a, b).forEach((p, runs) => {
      const share = all.filter((order) => countRuns(order) === runs).length / all.length;
      expect(p).toBeCloseTo(share, 12);
    });
  });

  test('equals the published critical values of Swed and Eisenhart 1943', () => {
    // MEM: at 10 and 10, at most 6 runs is significant at .025 one-sided (P = .019), 7 is not (.051).
    const cumulative = (runs: number) =>
      runsDistribution(10, 10)
        .slice(0, runs + 1)
        .reduce((sum, p) => sum + p, 0);
    expect(cumulative(6)).toBeCloseTo(0.019, 3);
    expect(cumulative(7)).toBeCloseTo(0.051, 3);
  });

  test('all of A before all of B has the smallest p there is, 2 over the number of orders', () => {
    expect(runsTest([labels('AAAAABBBBB')]).p).toBeCloseTo(2 / 252, 12);
  });

  test('strict alternation is never suspicious', () => {
    expect(runsTest([labels('ABABABABAB')]).p).toBeCloseTo(1, 12);
  });

  test('recordings add their runs, each under its own counts', () => {
    const { runs, p } = runsTest([labels('AAABBB'), labels('AABB'), labels('AAAA')]);
    expect(runs).toBe(4);
    expect(p).toBeCloseTo((2 / 20) * (2 / 6), 12);
  });

  test('thousands of epochs neither overflow nor lose the sum of 1', () => {
    const sum = runsDistribution(3000, 2500).reduce((total, p) => total + p, 0);
    expect(sum).toBeCloseTo(1, 8);
  });
});
