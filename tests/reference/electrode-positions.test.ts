import { describe, expect, it } from 'vitest';
import { sitePositions } from '../../workers/engine/read';
import reference from './electrode-positions.json';

// Source: see "source" in the JSON, which holds what NumPy made of the percentage rule (COMP).
describe('the places of the 10-10 sites', () => {
  it('equal the NumPy construction to its six decimals', () => {
    const entries = Object.entries(reference.positions);
    expect(entries.length).toBeGreaterThan(70);
    for (const [site, [x, y, z]] of entries) {
      const place = sitePositions.get(site);
      expect(place, site).toBeDefined();
      const off = Math.max(Math.abs(place!.x - x), Math.abs(place!.y - y), Math.abs(place!.z - z));
      expect(off, site).toBeLessThan(1e-6);
    }
  });

  it('lie the stated great-circle distances apart', () => {
    for (const [pair, degrees] of Object.entries(reference.greatCircleDistancesDeg)) {
      const [a, b] = pair.split('-').map((site) => sitePositions.get(site)!);
      const angle = (Math.acos(a.x * b.x + a.y * b.y + a.z * b.z) * 180) / Math.PI;
      expect(Math.abs(angle - degrees), pair).toBeLessThan(1e-5);
    }
  });

  it('mirror left and right, and lie on the unit sphere', () => {
    for (const [site, place] of sitePositions) {
      expect(Math.hypot(place.x, place.y, place.z)).toBeCloseTo(1, 12);
      const number = /\d+$/.exec(site);
      if (!number) continue;
      const odd = Number(number[0]) % 2 === 1;
      const twin = site.replace(/\d+$/, String(Number(number[0]) + (odd ? 1 : -1)));
      const other = sitePositions.get(twin)!;
      expect(place.x, site).toBeCloseTo(-other.x, 12);
      expect(place.y, site).toBeCloseTo(other.y, 12);
      expect(Math.sign(place.x), site).toBe(odd ? -1 : 1);
    }
  });
});
