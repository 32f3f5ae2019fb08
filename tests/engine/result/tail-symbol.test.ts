import { expect, test } from 'vitest';
import { tailStatistic } from '$engine';
import { tailSymbol } from '$lib/result/tail-symbol';

test('the maximum is labelled with what it is taken over, for each tail', () => {
  for (const [tail, symbol, ofMinusTwo] of [
    ['two-sided', '|z|', 2],
    ['a-greater', 'z', -2],
    ['b-greater', '−z', 2],
  ] as const) {
    expect(tailSymbol(tail)).toBe(symbol);
    expect(tailStatistic(-2, tail)).toBe(ofMinusTwo);
  }
});
