import { describe, expect, test } from 'vitest';
import { positionOfSite } from '../../../workers/engine';
import { projectSite, siteCurve } from '../../../src/lib/figures/head-geometry';
import { placeLabels } from '../../../src/lib/figures/label-placement';

const sites = 'Fp1 Fp2 F7 F3 Fz F4 F8 T7 C3 Cz C4 T8 P7 P3 Pz P4 P8 O1 O2'.split(' ');
const place = (site: string) => projectSite(positionOfSite(site)!);

describe('projectSite', () => {
  test('puts the vertex in the middle, the nose up and the right ear right', () => {
    expect(place('Cz').x).toBeCloseTo(0, 6);
    expect(place('Cz').y).toBeCloseTo(0, 6);
    expect(place('Fz').y).toBeLessThan(0);
    expect(place('C4').x).toBeGreaterThan(0);
  });

  test('mirrors left and right', () => {
    expect(place('C3').x).toBeCloseTo(-place('C4').x, 6);
    expect(place('C3').y).toBeCloseTo(place('C4').y, 6);
  });
});

describe('siteCurve', () => {
  test('is bent away from the centre, so that a long line leaves the sites between free', () => {
    const centre = { x: 0, y: 0 };
    const { samples } = siteCurve({ x: -50, y: -40 }, { x: 50, y: -40 }, centre);
    expect(samples[7]!.y).toBeLessThan(-40);
  });
});

describe('placeLabels', () => {
  const points = sites.map((text) => {
    const { x, y } = place(text);
    return { text, x: 200 + x * 170, y: 200 + y * 170 };
  });

  test('lets no two labels of the 10-20 sites overlap at the size of a phone', () => {
    const fontPx = 11;
    const boxes = placeLabels(points, [], { fontPx, dotPx: 5 }).map((label, i) => {
      const width = points[i]!.text.length * fontPx * 0.58;
      const left = label.x - width * { start: 0, middle: 0.5, end: 1 }[label.anchor];
      return { left, right: left + width, top: label.y - 9, bottom: label.y + 2 };
    });
    boxes.forEach((one, i) =>
      boxes.slice(i + 1).forEach((other, j) => {
        const apart =
          one.right <= other.left ||
          other.right <= one.left ||
          one.bottom <= other.top ||
          other.bottom <= one.top;
        expect(apart, `${sites[i]} and ${sites[i + 1 + j]}`).toBe(true);
      }),
    );
  });

  test('moves a label to the side that a line leaves free', () => {
    const point = { text: 'C3', x: 100, y: 100 };
    const above = Array.from({ length: 20 }, (_, i) => ({ x: 90 + i, y: 88 }));
    const [free] = placeLabels([point], [], { fontPx: 11, dotPx: 4 });
    const [moved] = placeLabels([point], [above], { fontPx: 11, dotPx: 4 });
    expect(free!.y).toBeLessThan(100);
    expect(moved!.y).toBeGreaterThan(free!.y);
  });
});
