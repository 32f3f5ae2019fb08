import { describe, expect, it } from 'vitest';
import {
  bytesOf,
  factsOf,
  openEdf,
  projectElectrodes,
  sitePositions,
  type Sidecars,
} from '../../../workers/engine/read';
import { overwrite, smallBytes } from './samples';

const identity = { sha256: 'a'.repeat(64), name: 'small.edf' };

async function describeSmall(sidecars?: Sidecars, bytes = smallBytes()) {
  return factsOf(await openEdf(bytesOf(bytes)), identity, sidecars);
}

describe('factsOf', () => {
  it('describes channels by their labels and events by the annotations', async () => {
    const { facts, eventSource, notices } = await describeSmall();
    expect(facts).toMatchObject({ ...identity, segments: [{ startS: 0, durationS: 4 }] });
    expect(facts.channels.map((c) => [c.site, c.type, c.unit, c.positionSource, c.bad])).toEqual([
      ['Fp1', 'EEG', 'uV', 'label', false],
      ['T7', 'EEG', 'uV', 'label', false],
      ['Temp', 'MISC', 'degC', null, false],
    ]);
    expect(facts.channels[1].position).toEqual(sitePositions.get('T7'));
    expect(facts.events).toEqual([
      { onsetS: 0.5, durationS: null, label: 'go' },
      { onsetS: 2.25, durationS: 0.5, label: 'stöp' },
    ]);
    expect(eventSource).toBe('annotation');
    expect(notices).toEqual([]);
  });

  it('takes events, types, bad channels and positions from the sidecars', async () => {
    const place = (site: string): [number, number, number] => {
      const { x, y, z } = sitePositions.get(site)!;
      return [x * 90 + 5, y * 90 - 3, z * 90 + 40];
    };
    const names = ['Fp1', 'T7', 'Cz', 'Pz', 'O2', 'C4'];
    const { facts, eventSource, notices } = await describeSmall({
      events: [{ onsetS: 99, durationS: null, label: 'late' }],
      channels: [
        { name: 'T3', type: 'MISC', units: 'mV', bad: true },
        { name: 'Nowhere', type: 'EEG', units: 'uV', bad: false },
      ],
      electrodes: names.map((name) => ({ name, place: place(name) })),
    });
    expect(eventSource).toBe('events.tsv');
    expect(facts.events[0].label).toBe('late');
    expect(facts.channels[1]).toMatchObject({
      type: 'MISC',
      bad: true,
      positionSource: 'electrodes.tsv',
    });
    const fp1 = sitePositions.get('Fp1')!;
    expect(facts.channels[0].position!.x).toBeCloseTo(fp1.x, 9);
    expect(facts.channels[0].position!.y).toBeCloseTo(fp1.y, 9);
    expect(notices.map((notice) => notice.code)).toEqual([
      'events-outside',
      'sidecar-rows-unused',
      'sidecar-rows-unused',
    ]);
    expect(notices[1].message).toContain('Nowhere');
  });

  it('never gives two channels one name, and says which sites were claimed twice', async () => {
    const bytes = overwrite(smallBytes(), 256 + 16, 'Fp1-A2          ');
    const { facts, notices } = await describeSmall({}, overwrite(bytes, 256, 'Fp1-A2          '));
    expect(facts.channels.map((channel) => channel.site)).toEqual(['Fp1-A2', 'Fp1-A2 (2)', 'Temp']);
    expect(notices[0]).toMatchObject({ code: 'sites-shared' });
    expect(notices[0].message).toContain('Fp1');
  });

  it('marks a channel without a usable scale as bad', async () => {
    const { facts, notices } = await describeSmall(
      {},
      overwrite(smallBytes(), 256 + 4 * 112, '-100    '),
    );
    expect(facts.channels.map((channel) => channel.bad)).toEqual([true, false, false]);
    expect(notices[0].code).toBe('signal-scale');
  });
});

describe('projectElectrodes', () => {
  const sites = ['Fp1', 'Fp2', 'F7', 'F8', 'Cz', 'Pz', 'O1', 'O2', 'C3', 'C4', 'T7', 'T8'];

  it('finds the sphere whatever the unit, origin and axes', () => {
    for (const [scale, offset, turn] of [
      [0.09, 0, (x: number, y: number, z: number) => [x, y, z]],
      // x to the nose, y to the left ear: the axes of another convention.
      [90, 20, (x: number, y: number, z: number) => [y, -x, z]],
      [9.2, -4, (x: number, y: number, z: number) => [-y, z, -x]],
    ] as const) {
      const electrodes = sites.map((name) => {
        const { x, y, z } = sitePositions.get(name)!;
        const place = turn(x, y, z).map((v) => v * scale + offset) as [number, number, number];
        return { name, place };
      });
      const { positions, notices } = projectElectrodes(electrodes);
      for (const name of sites) {
        const [found, ideal] = [positions.get(name)!, sitePositions.get(name)!];
        expect(Math.hypot(found.x - ideal.x, found.y - ideal.y, found.z - ideal.z)).toBeLessThan(
          1e-9,
        );
      }
      expect(notices).toHaveLength(scale === 0.09 ? 0 : 1);
    }
  });

  it('takes the axes as they are when fewer than four sites are known, and survives odd places', () => {
    const { positions } = projectElectrodes([
      { name: 'a', place: [0, 0, 2] },
      { name: 'b', place: [0, 0, 0] },
      { name: 'c', place: null },
    ]);
    expect(positions.get('a')).toEqual({ x: 0, y: 0, z: 1 });
    expect(positions.has('b')).toBe(false);
    expect(projectElectrodes([]).positions.size).toBe(0);
  });

  it('says when the places do not lie near a sphere', () => {
    const electrodes = Array.from({ length: 8 }, (_, i) => ({
      name: `D${i}`,
      place: [0.1 * i, 0.01 * (i % 2), i * i] as [number, number, number],
    }));
    expect(projectElectrodes(electrodes).notices[0].code).toBe('electrodes-not-on-sphere');
  });
});
