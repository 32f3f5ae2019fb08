import { describe, expect, test } from 'vitest';
import { readView, writeView, type ViewContext } from '../../../src/lib/result/selection-query';

const context: ViewContext = {
  axes: {
    sites: ['C3', 'Cz', 'P4'],
    pairs: [
      [0, 1],
      [0, 2],
      [1, 2],
    ],
    frequenciesHz: [8.123456789, 10, 12.5],
    timesS: [-0.2, 0, 0.2, 0.4],
  },
  corrections: ['cluster-mass', 'max-statistic'],
  fallback: { pair: 2, point: 5 },
};

describe('readView', () => {
  test('shows the fallback where nothing is chosen', () => {
    expect(readView('', context)).toEqual({
      pair: 2,
      point: 5,
      correction: 'cluster-mass',
      across: 'peaks',
    });
  });

  test('reads a pair by its sites and a point by the nearest frequency and time', () => {
    const view = readView('?pair=C3,P4&hz=10.4&s=0.19&across=point', context);
    expect(view).toMatchObject({ pair: 1, point: 1 * 4 + 2, across: 'point' });
  });

  test('takes no correction that the plan does not name', () => {
    expect(readView('?correction=benjamini-hochberg', context).correction).toBe('cluster-mass');
    expect(readView('?correction=max-statistic', context).correction).toBe('max-statistic');
  });

  test('falls back from what fits no axis, so that an old link still opens', () => {
    expect(readView('?pair=X1,X2&hz=&s=abc', context)).toMatchObject({ pair: 2, point: 5 });
  });
});

describe('writeView', () => {
  test('is read back as the same view, for every pair and point', () => {
    for (let pair = 0; pair < 3; pair++) {
      for (let point = 0; point < 12; point++) {
        const view = { pair, point, correction: 'max-statistic', across: 'point' as const };
        expect(readView(writeView('', view, context), context)).toEqual(view);
      }
    }
  });

  test("keeps other parameters, and leaves out what is the page's own default", () => {
    const view = readView('?plan=2&correction=max-statistic', context);
    const query = writeView('?plan=2', { ...view, correction: 'cluster-mass' }, context);
    expect(query).toBe('plan=2&pair=Cz%2CP4&hz=10&s=0');
  });
});
