import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest';
import { Selection } from '../../../src/lib/result/selection.svelte';

const axes = {
  sites: ['C3', 'Cz', 'P4'],
  pairs: [
    [0, 1],
    [0, 2],
    [1, 2],
  ] as [number, number][],
  frequenciesHz: [8, 10],
  timesS: [0, 0.2, 0.4],
};
const context = { axes, corrections: ['max-statistic', 'cluster-mass'] };
const written: { query: string; replace: boolean }[] = [];

function begin(query: string): Selection {
  const fallback = { pair: 0, point: 0 };
  return new Selection(
    () => ({ ...context, fallback }),
    (next, { replace }) => written.push({ query: next, replace }),
    query,
  );
}

beforeEach(() => {
  vi.useFakeTimers();
  written.length = 0;
});
afterEach(() => vi.useRealTimers());

describe('Selection', () => {
  test('shows a choice at once and writes the address when the keys rest', () => {
    const selection = begin('');
    selection.choosePoint(1);
    selection.choosePoint(2);
    expect(selection.point).toBe(2);
    expect(written).toEqual([]);
    vi.runAllTimers();
    expect(written).toEqual([{ query: 'pair=C3%2CCz&hz=8&s=0.4', replace: true }]);
  });

  test('makes Back return to the pair before, and not to every point on the way', () => {
    const selection = begin('');
    selection.choosePair(2, 4);
    vi.runAllTimers();
    selection.choosePoint(5);
    vi.runAllTimers();
    selection.chooseCorrection('cluster-mass');
    expect(written.map(({ replace }) => replace)).toEqual([false, true, false]);
  });

  test('follows the address, but not while a choice waits to be written', () => {
    const selection = begin('');
    selection.follow('?pair=C3,P4');
    expect(selection.pair).toBe(1);
    selection.choosePair(2);
    selection.follow('?pair=C3,P4');
    expect(selection.pair).toBe(2);
    vi.runAllTimers();
    selection.follow('?pair=C3,P4');
    expect(selection.pair).toBe(1);
  });

  test('writes nothing for what is chosen already, or after the page is left', () => {
    const selection = begin('?pair=C3,P4&hz=8&s=0');
    selection.choosePair(1, 0);
    selection.choosePoint(0);
    selection.choosePoint(1);
    selection.leave();
    vi.runAllTimers();
    expect(written).toEqual([]);
  });
});
