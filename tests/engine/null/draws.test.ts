import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { drawPermutations, drawsByteLength, nullModels } from '../../../workers/engine';
import { labels } from '../../../workers/engine/null/labels';
import type { DrawShape, NullModel } from '../../../workers/engine/null/model';
import { timeShift } from '../../../workers/engine/null/time-shift';
import { trialOrder } from '../../../workers/engine/null/trial-order';
import { noise, tinyRun } from './tiny-run';

const anyShape = fc
  .record({
    permutations: fc.integer({ min: 1, max: 12 }),
    siteCount: fc.integer({ min: 2, max: 4 }),
    epochsA: fc.integer({ min: 2, max: 30 }),
    epochsB: fc.integer({ min: 2, max: 30 }),
    windowSamples: fc.integer({ min: 1, max: 300 }),
  })
  .map((shape) => ({
    ...shape,
    // Three blocks, for nulls that keep to them.
    blocks: Array.from({ length: shape.epochsA + shape.epochsB }, (_, n) => n % 3),
  }));

function drawn(model: NullModel, seed: string, shape: DrawShape): ArrayBuffer {
  const draws = new ArrayBuffer(model.drawsByteLength(shape));
  model.draw(seed, { from: 0, to: shape.permutations }, draws, shape);
  return draws;
}

/** Epochs labelled A of one permutation. */
function labelled(draws: ArrayBuffer, shape: DrawShape, p: number): number[] {
  const blocks = Math.ceil((shape.epochsA + shape.epochsB) / 7);
  const masks = new Uint8Array(draws, p * blocks, blocks);
  return Array.from({ length: blocks * 7 }, (_, n) => n).filter(
    (n) => (masks[Math.floor(n / 7)] >> (n % 7)) & 1,
  );
}

describe('label draws', () => {
  test('label exactly as many epochs A as there are, all of them real epochs', () => {
    fc.assert(
      fc.property(anyShape, fc.string(), (shape, seed) => {
        const draws = drawn(labels, seed, shape);
        for (let p = 0; p < shape.permutations; p++) {
          const chosen = labelled(draws, shape, p);
          expect(chosen.length).toBe(shape.epochsA);
          expect(Math.max(...chosen)).toBeLessThan(shape.epochsA + shape.epochsB);
        }
      }),
    );
  });

  test('choose each of the 35 sets of 3 of 7 equally often', () => {
    const shape = { permutations: 35_000, siteCount: 2, epochsA: 3, epochsB: 4, windowSamples: 1 };
    const draws = drawn(labels, 'sets', shape);
    const counts = new Map<string, number>();
    for (let p = 0; p < shape.permutations; p++) {
      const key = labelled(draws, shape, p).join();
      counts.set(key, (counts.get(key) ?? 0) + 1);
    }
    const chi = [...counts.values()].reduce((sum, count) => sum + (count - 1000) ** 2 / 1000, 0);
    expect(counts.size).toBe(35);
    // SciPy 1.10.1: chi2.isf(1e-6, 34) = 88.38; a false alarm once in a million seeds.
    expect(chi).toBeLessThan(88.38);
  });
});

describe('trial-order draws', () => {
  test('are, for each site, an order of A within A and of B within B', () => {
    fc.assert(
      fc.property(anyShape, fc.string(), (shape, seed) => {
        const epochCount = shape.epochsA + shape.epochsB;
        const orders = new Uint16Array(drawn(trialOrder, seed, shape));
        for (let row = 0; row < orders.length; row += epochCount) {
          const order = [...orders.subarray(row, row + epochCount)];
          const sorted = (list: number[]) => [...list].sort((a, b) => a - b);
          const places = Array.from({ length: epochCount }, (_, n) => n);
          expect(sorted(order.slice(0, shape.epochsA))).toEqual(places.slice(0, shape.epochsA));
          expect(sorted(order.slice(shape.epochsA))).toEqual(places.slice(shape.epochsA));
        }
      }),
    );
  });

  test('are independent between sites: both orders of 2 epochs go with both of the other site', () => {
    const shape = { permutations: 4000, siteCount: 2, epochsA: 2, epochsB: 2, windowSamples: 1 };
    const orders = new Uint16Array(drawn(trialOrder, 'sites', shape));
    const counts = [0, 0, 0, 0];
    for (let p = 0; p < shape.permutations; p++) counts[2 * orders[p * 8] + orders[p * 8 + 4]]++;
    const chi = counts.reduce((sum, count) => sum + (count - 1000) ** 2 / 1000, 0);
    // SciPy 1.10.1: chi2.isf(1e-6, 3) = 30.66.
    expect(chi).toBeLessThan(30.66);
  });
});

describe('time-shift draws', () => {
  test('are shifts within the window, and uniform over it', () => {
    const shape = { permutations: 500, siteCount: 2, epochsA: 5, epochsB: 5, windowSamples: 10 };
    const shifts = new Uint16Array(drawn(timeShift, 'shifts', shape));
    const counts = new Array<number>(10).fill(0);
    for (const shift of shifts) counts[shift]++;
    expect(shifts.length).toBe(10_000);
    const chi = counts.reduce((sum, count) => sum + (count - 1000) ** 2 / 1000, 0);
    // SciPy 1.10.1: chi2.isf(1e-6, 9) = 44.81.
    expect(chi).toBeLessThan(44.81);
  });
});

describe('every null model', () => {
  for (const model of nullModels) {
    test(`${model.id}: permutation p is the same whatever range it is drawn in`, () => {
      fc.assert(
        fc.property(anyShape, fc.string(), fc.nat(), (shape, seed, at) => {
          const whole = drawn(model, seed, shape);
          const parts = new ArrayBuffer(whole.byteLength);
          const cut = at % (shape.permutations + 1);
          model.draw(seed, { from: cut, to: shape.permutations }, parts, shape);
          model.draw(seed, { from: 0, to: cut }, parts, shape);
          expect(new Uint8Array(parts)).toEqual(new Uint8Array(whole));
        }),
        { numRuns: 40 },
      );
    });

    test(`${model.id}: refuses a range or a buffer that does not fit the plan`, () => {
      const { plan, axes, counts } = tinyRun(noise('n'), { nullId: model.id });
      const bytes = drawsByteLength(plan, axes, counts);
      const draw = (from: number, to: number, length: number) => () => {
        drawPermutations(plan, axes, counts, { from, to }, new ArrayBuffer(length));
      };
      expect(draw(0, 100, bytes)).toThrow("range 0 to 100 leaves the plan's 99");
      expect(draw(5, 4, bytes)).toThrow(RangeError);
      expect(draw(0, 99, bytes - 1)).toThrow(`${bytes - 1} bytes where the plan needs ${bytes}`);
    });
  }
});
