import { execFileSync } from 'node:child_process';
import { describe, expect, test } from 'vitest';
import { laplacianMatrix, sitePoints } from '../../workers/engine/prepare/laplacian';
import { sampleChannel, samplePlan, sampleRecording } from '../engine/sample-plan';

// Outside values: the formulas of Perrin et al. 1989 in NumPy and SciPy (Debian's python3-scipy) at
// test time: scipy.special.eval_legendre, and one linear system that carries the constant c0 along
// instead of eliminating it. COMP.
const script = `
import json, sys
import numpy as np
from scipy.special import eval_legendre
p = np.array(json.load(sys.stdin))
x = np.clip(p @ p.T, -1, 1)
g = sum((2*n+1) / (n*(n+1.))**4 * eval_legendre(n, x) for n in range(1, 21)) / (4*np.pi)
h = sum((2*n+1) / (n*(n+1.))**3 * eval_legendre(n, x) for n in range(1, 21)) / (4*np.pi)
c = len(p)
system = np.block([[g + 1e-5*np.eye(c), np.ones((c, 1))], [np.ones((1, c)), np.zeros((1, 1))]])
coefficients = np.linalg.solve(system, np.vstack([np.eye(c), np.zeros((1, c))]))[:c]
json.dump((h @ coefficients).ravel().tolist(), sys.stdout)
`;

type Point = [number, number, number];

/** Points spread evenly over the upper part of the sphere. */
function spread(count: number): Point[] {
  return Array.from({ length: count }, (_, i) => {
    const z = 1 - (1.2 * (i + 0.5)) / count;
    const angle = i * Math.PI * (3 - Math.sqrt(5));
    const r = Math.sqrt(1 - z * z);
    return [r * Math.cos(angle), r * Math.sin(angle), z];
  });
}

function python(points: Point[]): number[] {
  const options = { input: JSON.stringify(points), encoding: 'utf8' } as const;
  return JSON.parse(execFileSync('/usr/bin/python3', ['-c', script], options)) as number[];
}

describe('spherical-spline surface Laplacian', () => {
  test.each([4, 19, 64])('of %i sites equals an independent solution', (count) => {
    const points = spread(count);
    const outside = python(points);
    const largest = Math.max(...outside.map(Math.abs));
    // The system's condition is near 1e4, so f64 keeps some eleven digits.
    laplacianMatrix(points).forEach((value, i) => {
      expect(Math.abs(value - outside[i])).toBeLessThan(1e-9 * largest);
    });
  });

  test('a potential that is equal everywhere has none', () => {
    const matrix = laplacianMatrix(spread(32));
    const largest = Math.max(...matrix.map(Math.abs));
    for (let i = 0; i < 32; i++) {
      const sum = matrix.subarray(i * 32, (i + 1) * 32).reduce((all, value) => all + value, 0);
      expect(Math.abs(sum)).toBeLessThan(1e-9 * largest);
    }
  });

  test('turning the head changes nothing', () => {
    const turned = spread(32).map(([x, y, z]): Point => [0.6 * x - 0.8 * z, y, 0.8 * x + 0.6 * z]);
    const matrix = laplacianMatrix(spread(32));
    const largest = Math.max(...matrix.map(Math.abs));
    laplacianMatrix(turned).forEach((value, i) => {
      expect(Math.abs(value - matrix[i])).toBeLessThan(1e-9 * largest);
    });
  });

  test('of a dipole it is twice the potential', () => {
    const points = spread(64);
    const matrix = laplacianMatrix(points);
    const of = (potential: number[]) =>
      potential.map((_, i) =>
        potential.reduce((sum, value, j) => sum + matrix[i * 64 + j] * value, 0),
      );
    // Minus the Laplacian of P_1 is 2 P_1 (Perrin et al. 1989).
    const dipole = of(points.map(([, , z]) => z));
    expect(dipole[0]).toBeCloseTo(2 * points[0][2], 1);
  });

  test('sites without a position are named, and two at one place', () => {
    const place = (x: number, y: number, z: number) => ({ position: { x, y, z } });
    const plan = samplePlan({ sites: ['F3', 'C3', 'P4', 'Oz'] });
    const channels = [
      sampleChannel('F3', place(0, 1, 0)),
      sampleChannel('C3'),
      sampleChannel('P4', place(0, 0, 1)),
      sampleChannel('Oz'),
    ];
    expect(() => sitePoints(plan, sampleRecording([], { channels }))).toThrow(
      /one\.edf has none for C3 and Oz/,
    );
    channels[1] = sampleChannel('C3', place(0, 0, 2));
    channels[3] = sampleChannel('Oz', place(1, 0, 0));
    expect(() => sitePoints(plan, sampleRecording([], { channels }))).toThrow(
      /C3 and P4 are at one place/,
    );
  });
});
