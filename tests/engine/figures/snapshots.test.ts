import type { Component } from 'svelte';
import { render } from 'svelte/server';
import { describe, expect, test } from 'vitest';
import HeadMap from '../../../src/lib/figures/HeadMap.svelte';
import PairMatrix from '../../../src/lib/figures/PairMatrix.svelte';
import PhaseRose from '../../../src/lib/figures/PhaseRose.svelte';
import TimeFrequencyMap from '../../../src/lib/figures/TimeFrequencyMap.svelte';
import { pairLookup } from '../../../src/lib/result/matrix-order';
import { phaseRose, positionOfSite } from '../../../workers/engine';

/** Seeded figures as committed SVG: a change of what is drawn shows as a change of text. */
function svg<Props extends Record<string, unknown>>(
  figure: Component<Props>,
  props: Props,
): string {
  const { body } = render(figure as Component<Record<string, unknown>>, { props });
  return body.replace(/<!--.*?-->/gs, '').replace(/></g, '>\n<');
}

const sites = ['F3', 'F4', 'C3', 'C4', 'P4'];
const pairs = sites.flatMap((_, j) =>
  sites.slice(j + 1).map((_, i) => [j, j + 1 + i] as [number, number]),
);
const z = Float32Array.from(pairs, (_, i) => ((i * 7) % 11) - 5);
const adjustedP = Float32Array.from(z, (value) => Math.max(0.001, 1 - Math.abs(value) / 5));
const describePair = (pair: number) => pairs[pair]?.map((site) => sites[site]).join(' and ') ?? '';
const nothing = () => undefined;

describe('figures with seeded data', () => {
  test('the matrix draws what it drew before', async () => {
    const figure = svg(PairMatrix, {
      labels: sites,
      pairAt: pairLookup(pairs, sites.length, [0, 1, 2, 3, 4]),
      z,
      adjustedP,
      surviving: new Set([6, 3]),
      chosen: 6,
      limit: 5,
      alpha: 0.05,
      width: 200,
      label: 'Every pair',
      describe: describePair,
      onchoose: nothing,
    });
    await expect(figure).toMatchFileSnapshot('snapshots/pair-matrix.svg.txt');
  });

  test('the head draws what it drew before', async () => {
    const figure = svg(HeadMap, {
      sites,
      positions: sites.map((site) => positionOfSite(site) ?? null),
      pairs,
      edges: [
        { pair: 6, z: 5, survives: true },
        { pair: 3, z: -4, survives: true },
        { pair: 0, z: 2, survives: false },
      ],
      chosen: 6,
      width: 300,
      label: 'Head',
      describe: describePair,
      onchoose: nothing,
    });
    await expect(figure).toMatchFileSnapshot('snapshots/head-map.svg.txt');
  });

  test('the time-frequency map draws what it drew before', async () => {
    const timesS = [-0.2, 0, 0.2, 0.4, 0.6];
    const map = Float32Array.from({ length: 15 }, (_, x) => ((x * 5) % 9) - 4);
    const figure = svg(TimeFrequencyMap, {
      z: map,
      frequenciesHz: [8, 10, 12.5],
      timesS,
      claimed: Int8Array.from(map, (value) => (value > 2 ? 1 : 0)),
      point: 7,
      limit: 4,
      width: 320,
      timeLabel: 's from the event',
      label: 'Map',
      describe: (point: number) => `point ${point}`,
      onchoose: nothing,
    });
    await expect(figure).toMatchFileSnapshot('snapshots/time-frequency-map.svg.txt');
  });

  test('the rose draws what it drew before', async () => {
    const phases = Uint8Array.from({ length: 60 }, (_, i) => (30 + ((i * i) % 40)) & 255);
    const epochs = { from: 0, to: 60 };
    const rose = phaseRose(phases, new Uint8Array(60), epochs, 0, 1);
    const figure = svg(PhaseRose, {
      counts: rose.counts,
      meanLength: rose.meanLength,
      meanAngleRad: rose.meanAngleRad,
      condition: 'a' as const,
      largest: 20,
      size: 140,
    });
    await expect(figure).toMatchFileSnapshot('snapshots/phase-rose.svg.txt');
  });
});
