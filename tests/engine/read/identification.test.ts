import { describe, expect, it } from 'vitest';
import {
  blankIdentification,
  bytesOf,
  identificationOf,
  openEdf,
} from '../../../workers/engine/read';
import { overwrite, smallBytes } from './samples';

const named = (changes: object = {}) =>
  smallBytes({
    patient: 'MCH-0234567 F 02-MAY-1951 Haagse_Harry left_handed',
    recording: 'Startdate 05-MAR-2024 EMG561 BK/JOP Some_amplifier',
    ...changes,
  });

describe('identificationOf', () => {
  it('says which subfields of EDF+ can identify a person', async () => {
    const file = await openEdf(bytesOf(named()));
    const found = identificationOf(file);
    expect(found.identifies).toBe(true);
    expect(
      [...found.patient, ...found.recording].map((p) => [p.name, p.value, p.identifies]),
    ).toEqual([
      ['patient code', 'MCH-0234567', true],
      ['sex', 'F', false],
      ['birthdate', '02-MAY-1951', true],
      ['patient name', 'Haagse Harry', true],
      ['further text', 'left handed', true],
      ['start date', '05-MAR-2024', false],
      ['investigation code', 'EMG561', true],
      ['investigator or technician', 'BK/JOP', true],
      ['equipment', 'Some amplifier', false],
    ]);
  });

  it('takes the whole field of plain EDF as identifying unless it says nothing', async () => {
    const plain = overwrite(named(), 192, '     ');
    expect(identificationOf(await openEdf(bytesOf(plain))).patient[0].identifies).toBe(true);
    expect(identificationOf({ format: 'EDF', patient: '', recording: 'X X' }).identifies).toBe(
      false,
    );
  });
});

describe('blankIdentification', () => {
  it('changes the 160 bytes alone, keeps the form of EDF+ and leaves the input as it is', async () => {
    const bytes = named();
    const blanked = blankIdentification(bytes);
    const changed = [...blanked.keys()].filter((i) => blanked[i] !== bytes[i]);
    expect(Math.min(...changed)).toBeGreaterThanOrEqual(8);
    expect(Math.max(...changed)).toBeLessThan(168);
    expect(bytes).toEqual(named());
    const file = await openEdf(bytesOf(blanked));
    expect(file.patient).toBe('X X X X');
    expect(file.recording).toBe('Startdate X X X X');
    expect(identificationOf(file).identifies).toBe(false);
  });

  it('is the same for files that differ in identification only', () => {
    expect(blankIdentification(named())).toEqual(blankIdentification(smallBytes()));
  });

  it('leaves the fields of plain EDF empty, and refuses less than a header', async () => {
    const file = await openEdf(bytesOf(blankIdentification(overwrite(named(), 192, '     '))));
    expect([file.patient, file.recording]).toEqual(['', '']);
    expect(() => blankIdentification(new Uint8Array(255))).toThrow(/255 bytes/);
  });
});
