import { describe, expect, it } from 'vitest';
import {
  guessChannelType,
  positionOfSite,
  siteOf,
  sitePositions,
} from '../../../workers/engine/read';

describe('siteOf', () => {
  it.each([
    ['Fc5.', 'FC5'],
    ['EEG FC5-REF', 'FC5'],
    ['fc5', 'FC5'],
    ['Cz..', 'Cz'],
    ['Fp1-A2', 'Fp1'],
    ['FP1', 'Fp1'],
    ['EEG T3-LE', 'T7'],
    ['T4', 'T8'],
    ['T5', 'P7'],
    ['T6', 'P8'],
    ['EEG C3-M2', 'C3'],
    ['C4:A1', 'C4'],
    ['O2-AVG', 'O2'],
    ['C3M2', 'C3'],
    ['Iz..', 'Iz'],
    ['A1', 'A1'],
  ])('reads %j as %s', (label, site) => {
    expect(siteOf(label)).toBe(site);
  });

  it.each(['Fp1-F7', 'C3-Cz', 'ECG', 'EOG left', 'LFP 1', '', 'EEG', 'C33', 'X1', 'Resp chest'])(
    'finds no site in %j',
    (label) => {
      expect(siteOf(label)).toBeNull();
    },
  );

  it('reads every site it places as itself, whatever its case', () => {
    for (const site of sitePositions.keys()) {
      expect(siteOf(site.toUpperCase())).toBe(site);
      expect(siteOf(`EEG ${site.toLowerCase()}-REF`)).toBe(site);
    }
  });

  it('gives ears no place on the head map', () => {
    expect(positionOfSite('A1')).toBeNull();
    expect(positionOfSite('Cz')).toEqual({
      x: expect.closeTo(0, 12),
      y: expect.closeTo(0, 12),
      z: 1,
    });
  });
});

describe('guessChannelType', () => {
  it.each([
    ['Fc5.', 'uV', 'EEG'],
    ['EEG 012', 'uV', 'EEG'],
    ['Fp1-F7', 'uV', 'OTHER'],
    ['EOG horizontal', 'uV', 'EOG'],
    ['ROC-A1', 'uV', 'EOG'],
    ['ECG I', 'mV', 'ECG'],
    ['EKG', 'uV', 'ECG'],
    ['EMG submental', 'uV', 'EMG'],
    ['Resp oro-nasal', '', 'RESP'],
    ['Trigger', '', 'TRIG'],
    ['Temp rectal', 'degC', 'MISC'],
    ['LFP 3', 'uV', 'OTHER'],
    ['Something', 'kPa', 'MISC'],
  ])('takes %j in %j for %s', (label, unit, type) => {
    expect(guessChannelType(label, unit)).toBe(type);
  });
});
