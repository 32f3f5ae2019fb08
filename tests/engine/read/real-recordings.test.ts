import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { bytesOf, factsOf, identificationOf, openEdf } from '../../../workers/engine/read';

// Recordings of "EEG Motor Movement/Imagery" 1.0.0 (Schalk et al. 2004; PhysioNet, ODC-By 1.0).
const folder = process.env['RECORDINGS_DIR'];
if (!folder) console.info('Skipped the real recordings: RECORDINGS_DIR is unset.');

describe.skipIf(!folder)('real recordings (skipped where RECORDINGS_DIR is unset)', () => {
  const open = async (name: string) =>
    factsOfFile(new Uint8Array(await readFile(join(folder!, name))), name);
  const factsOfFile = async (bytes: Uint8Array, name: string) => {
    const file = await openEdf(bytesOf(bytes));
    return { file, ...(await factsOf(file, { sha256: '0'.repeat(64), name })) };
  };

  it.each([
    ['eyes-open.edf', 60],
    ['eyes-closed.edf', 60],
    ['fists.edf', 125],
  ])('%s holds 64 placed EEG channels at 160 Hz for %i s', async (name, seconds) => {
    const { file, facts, notices } = await open(name);
    expect(file).toMatchObject({
      format: 'EDF+C',
      startedAt: '2009-08-12T16:15:00',
      recordDurationS: 1,
    });
    expect(facts.segments).toEqual([{ startS: 0, durationS: seconds }]);
    expect(facts.channels).toHaveLength(64);
    for (const channel of facts.channels) {
      expect(channel).toMatchObject({ samplingRateHz: 160, unit: 'uV', type: 'EEG', bad: false });
      expect(channel.position, channel.label).not.toBeNull();
    }
    expect(new Set(facts.channels.map((channel) => channel.site)).size).toBe(64);
    expect(notices).toEqual([]);
    expect(identificationOf(file).identifies).toBe(false);
  });

  it('fists.edf holds the annotations that its protocol plays: T0 between T1 and T2', async () => {
    const { facts } = await open('fists.edf');
    const count = (label: string) => facts.events.filter((event) => event.label === label).length;
    expect([count('T0'), count('T1'), count('T2')]).toEqual([15, 8, 7]);
    facts.events.forEach((event, i) => {
      expect(event.label === 'T0').toBe(i % 2 === 0);
      expect(event.durationS).toBeGreaterThan(4);
    });
  });
});
