import { describe, expect, test } from 'vitest';
import { phaseRose, rosePetals } from '../../../workers/engine';

const byte = (degrees: number) => Math.round((degrees / 360) * 256) & 255;
const zeros = (count: number) => new Uint8Array(count);

describe('phaseRose', () => {
  test('finds the mean resultant length of a published sample, to the width of a byte', () => {
    // Jammalamadaka and SenGupta 2001, pp. 6 and 125: R = .766282 (REP, reference-values 1).
    const degrees = [...Array(12).fill(0), 3.6, ...Array(6).fill(36), 72, 108, 108, 169.2, 324];
    const phases = Uint8Array.from(degrees, byte);
    const rose = phaseRose(phases, zeros(24), { from: 0, to: 24 }, 0, 1);
    expect(Math.abs(rose.meanLength - 0.766282)).toBeLessThan(0.005);
  });

  test('centres a petal on zero: phases a little to either side of it fall together', () => {
    const phases = Uint8Array.from([253, 254, 0, 2, 3]);
    const { counts } = phaseRose(phases, zeros(5), { from: 0, to: 5 }, 0, 1);
    expect(counts[rosePetals / 2]).toBe(5);
  });

  test('takes only the epochs and the point asked for', () => {
    // [epoch][point]: point 1 of epochs 1 and 2 is a quarter turn, everything else is zero.
    const phases = Uint8Array.from([0, 0, 0, 64, 0, 64]);
    const rose = phaseRose(phases, zeros(6), { from: 1, to: 3 }, 1, 2);
    expect(rose.meanLength).toBeCloseTo(1, 12);
    expect(rose.meanAngleRad).toBeCloseTo(Math.PI / 2, 12);
    expect(rose.counts.reduce((sum, count) => sum + count, 0)).toBe(2);
  });

  test('does not change when all phases of both sites are rotated alike', () => {
    const j = Uint8Array.from({ length: 40 }, (_, i) => (i * 37) & 255);
    const k = Uint8Array.from({ length: 40 }, (_, i) => (i * i) & 255);
    const turned = (phases: Uint8Array) => phases.map((phase) => (phase + 91) & 255);
    const epochs = { from: 0, to: 40 };
    expect(phaseRose(turned(j), turned(k), epochs, 0, 1)).toEqual(phaseRose(j, k, epochs, 0, 1));
  });

  test('refuses no epochs, and a point outside', () => {
    expect(() => phaseRose(zeros(4), zeros(4), { from: 2, to: 2 }, 0, 1)).toThrow(RangeError);
    expect(() => phaseRose(zeros(4), zeros(4), { from: 0, to: 4 }, 1, 1)).toThrow(RangeError);
  });
});
