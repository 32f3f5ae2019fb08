import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { measureIds, measureOf, type Measure, type MeasureId } from '../../../workers/engine';
import { lagged, unit, valueOf, type Complex } from './value-of';

// reference-values, section 6 (06_connectivity.json): closed forms, COMP; formulas of Lachaux et
// al. 1999, Vinck et al. 2010 and 2011, Stam et al. 2007, Nolte et al. 2004. 0/0 is 0 by policy.
const eight = (deg: number) => new Array<number>(8).fill(deg);
const table: [string, number[], Partial<Record<MeasureId, number>>][] = [
  ['lag 90, n = 8', eight(90), row(1, 1, 1, 1, 1, 1)],
  ['lag 0, n = 8', eight(0), row(1, 1, 0, 0, 0, 0)],
  ['lag 180, n = 8', eight(180), row(1, 1, 0, 0, 0, 0)],
  ['lag 45, n = 5', [45, 45, 45, 45, 45], row(1, 1, 1, 1, 1, Math.SQRT1_2)],
  ['0 90 180 270', [0, 90, 180, 270], row(0, -1 / 3, 0, 0, -1, 0)],
  ['+60 -60, twice', [60, -60, 60, -60], row(0.5, 0, 0, 0, -1 / 3, 0)],
  ['+90 x3, -90 x1', [90, 90, 90, -90], row(0.5, 0, 0.5, 0.5, 0, 0.5)],
  ['0 0 90 90', [0, 0, 90, 90], row(Math.SQRT1_2, 1 / 3, 0.5, 1, 1, 0.5)],
];

function row(
  ispc: number,
  ppc: number,
  pli: number,
  wpli: number,
  debiased: number,
  part: number,
): Partial<Record<MeasureId, number>> {
  return {
    ispc,
    'pairwise-phase-consistency': ppc,
    'phase-lag-index': pli,
    'weighted-phase-lag-index': wpli,
    'debiased-weighted-phase-lag-index': debiased,
    'lagged-part': part,
  };
}

const pointMeasures = measureIds.map(measureOf);

describe.each(table)('%s', (_, differences, expected) => {
  test.each(Object.entries(expected) as [MeasureId, number][])('has %s %f', (id, value) => {
    // Phasors are f32, 6e-8 each.
    expect(Math.abs(valueOf(measureOf(id), lagged(differences)) - value)).toBeLessThan(1e-6);
  });
});

test('cross-spectra 4+3i, 1+i, 1-2i have the stated values', () => {
  // Same section: ISPC .6658055, PPC .1649454, PLI 1/3, wPLI 1/3, debiased -5/11. COMP
  const one: Complex = [1, 0];
  const amplitudes: Complex[] = [
    [4, 3],
    [1, 1],
    [1, -2],
  ];
  const epochs = amplitudes.map((j) => ({ j, k: one }));
  const units = amplitudes.map(([x, y]) => ({ j: unit(Math.atan2(y, x)), k: one }));
  const expected = {
    ispc: 0.6658055,
    'pairwise-phase-consistency': 0.1649454,
    'phase-lag-index': 1 / 3,
    'weighted-phase-lag-index': 1 / 3,
    'debiased-weighted-phase-lag-index': -5 / 11,
  };
  for (const [id, value] of Object.entries(expected) as [MeasureId, number][]) {
    const measure = measureOf(id);
    const found = valueOf(measure, measure.needsAmplitude ? epochs : units);
    expect(Math.abs(found - value), id).toBeLessThan(1e-6);
  }
});

test('PPC has the same mean at every count, ISPC squared has not, by full enumeration', () => {
  // Same section: phases 0/90/180 with probabilities 1/2, 1/4, 1/4: E[PPC] = 1/8 for n = 2..5,
  // E[R^2] = 9/16, 5/12, 11/32, 3/10. COMP
  const squares = { 2: 9 / 16, 3: 5 / 12, 4: 11 / 32, 5: 3 / 10 };
  const phases = [0, 0, 90, 180];
  for (const [key, expected] of Object.entries(squares)) {
    const n = Number(key);
    let ppc = 0;
    let square = 0;
    for (let code = 0; code < 4 ** n; code++) {
      const chosen = Array.from({ length: n }, (_, i) => phases[Math.floor(code / 4 ** i) % 4]);
      ppc += valueOf(measureOf('pairwise-phase-consistency'), lagged(chosen)) / 4 ** n;
      square += valueOf(measureOf('ispc'), lagged(chosen)) ** 2 / 4 ** n;
    }
    expect(ppc).toBeCloseTo(1 / 8, 6);
    expect(square).toBeCloseTo(expected, 6);
  }
});

describe.each(pointMeasures.map((measure) => [measure.id, measure as Measure] as const))(
  '%s',
  (_, measure) => {
    const phasor = fc
      .tuple(
        fc.double({ min: 0.1, max: 10, noNaN: true }),
        fc.double({ min: -3, max: 3, noNaN: true }),
      )
      .map(([size, rad]): Complex => {
        const length = measure.needsAmplitude ? size : 1;
        return [length * Math.cos(rad), length * Math.sin(rad)];
      });
    const group = fc.array(fc.record({ j: phasor, k: phasor }), { minLength: 2, maxLength: 12 });

    test('stays in its range and is finite, from 2 epochs on', () => {
      fc.assert(
        fc.property(group, (epochs) => {
          const value = valueOf(measure, epochs);
          expect(value).toBeGreaterThanOrEqual(measure.range[0]);
          expect(value).toBeLessThanOrEqual(measure.range[1]);
        }),
      );
    });

    test('is the same with the sites exchanged', () => {
      fc.assert(
        fc.property(group, (epochs) => {
          const exchanged = epochs.map(({ j, k }) => ({ j: k, k: j }));
          expect(Math.abs(valueOf(measure, exchanged) - valueOf(measure, epochs))).toBeLessThan(
            1e-9,
          );
        }),
      );
    });

    test('does not change with the unit of a site', () => {
      if (!measure.needsAmplitude) {
        expect(measure.needsAmplitude).toBe(false);
        return;
      }
      const epochs = lagged([20, 100, -40, 60]).map(({ j, k }, i): { j: Complex; k: Complex } => ({
        j: [j[0] * (i + 1), j[1] * (i + 1)],
        k,
      }));
      const value = valueOf(measure, epochs);
      for (const scale of [1e-18, 1e18]) {
        const scaled = epochs.map(({ j, k }): { j: Complex; k: Complex } => ({
          j: [j[0] * scale, j[1] * scale],
          k: [k[0] / 8, k[1] / 8],
        }));
        expect(Math.abs(valueOf(measure, scaled) - value)).toBeLessThan(1e-6);
      }
    });

    test('adds a shifted window as it sums plain epochs', () => {
      const angle = (i: number) => unit(Math.sin(12.9898 * i) * 40);
      const [frequencyCount, sampleCount] = [2, 5];
      const rows = Array.from({ length: 2 * sampleCount * frequencyCount }, (_, i) => angle(i));
      const j = Float32Array.from(rows.slice(0, sampleCount * frequencyCount).flat());
      const k = Float32Array.from(rows.slice(sampleCount * frequencyCount).flat());
      const keptSamples = Int32Array.of(1, 4);
      const shifts = Uint16Array.of(3, 2, 0, 4);
      const sums = new Float64Array(2 * 2 * 2 * measure.termCount);
      measure.addShiftedTerms(j, k, sums, {
        ...{ frequencyCount, sampleCount, keptSamples, shifts },
        ...{ jShift: 0, kShift: 1, shiftStride: 2, permutations: 2 },
      });
      let at = 0;
      for (let p = 0; p < 2; p++) {
        for (const kept of keptSamples) {
          for (let f = 0; f < frequencyCount; f++, at += measure.termCount) {
            const js = 2 * (((kept + shifts[2 * p]) % sampleCount) * frequencyCount + f);
            const ks = 2 * (((kept + shifts[2 * p + 1]) % sampleCount) * frequencyCount + f);
            const phasors = Float32Array.of(j[js], j[js + 1], k[ks], k[ks + 1]);
            const plain = new Float64Array(measure.termCount);
            const place = { epochCount: 1, sampleCount: 1, partDistance: 1 };
            measure.sumTerms(phasors, Int32Array.of(0), Int32Array.of(2), plain, place);
            plain.forEach((term, i) => expect(sums[at + i]).toBeCloseTo(term, 12));
          }
        }
      }
    });
  },
);
