import { describe, expect, it } from 'vitest';
import { readFile } from 'node:fs/promises';
import { bytesOf, bytesOfBlob, EdfError, openEdf } from '../../../workers/engine/read';
import { overwrite, smallBytes, smallEdf } from './samples';

const codes = (notices: { code: string }[]) => notices.map((notice) => notice.code);
const open = (bytes: Uint8Array) => openEdf(bytesOf(bytes));

async function failure(bytes: Uint8Array): Promise<EdfError> {
  try {
    const file = await open(bytes);
    await file.readAnnotations();
  } catch (error) {
    expect(error).toBeInstanceOf(EdfError);
    return error as EdfError;
  }
  throw new Error('the bytes were read without an error');
}

describe('openEdf on the example of the EDF+ specification', () => {
  // Kemp and Olivan 2003, section 3.7, rebuilt (samples are ours): REP for header and texts.
  const path = new URL('data/spec-mnc-example.edf', import.meta.url);

  it('finds the header, the two segments of 50 ms and the gap between them', async () => {
    const file = await open(new Uint8Array(await readFile(path)));
    expect(file.format).toBe('EDF+D');
    expect(file.patient).toBe('MCH-0234567 F 02-MAY-1951 Haagse_Harry');
    expect(file.startedAt).toBe('2001-04-17T11:25:00');
    expect(file.channels.map((signal) => signal.label)).toEqual(['R APB']);
    expect(file.channels[0]).toMatchObject({
      samplingRateHz: 20000,
      unit: 'uV',
      dimension: 'mV',
      prefilter: 'HP:3Hz LP:20kHz',
      transducer: 'AgAgCl electrodes',
    });
    expect(file.segments).toEqual([
      { startS: 0, durationS: 0.05, firstRecord: 0, recordCount: 1 },
      { startS: 10, durationS: 0.05, firstRecord: 1, recordCount: 1 },
    ]);
    expect(file.durationS).toBeCloseTo(0.1, 12);
    expect(codes(file.notices)).toEqual(['gaps']);
  });

  it('reads the annotations of both records and scales millivolts to microvolts', async () => {
    const file = await open(new Uint8Array(await readFile(path)));
    const { annotations, notices } = await file.readAnnotations();
    expect(notices).toEqual([]);
    expect(annotations).toEqual([
      {
        onsetS: 0,
        durationS: null,
        text: 'Stimulus right wrist 0.2ms x 8.2mA at 6.5cm from recording site',
      },
      { onsetS: 0, durationS: null, text: 'Response 7.2mV at 3.8ms' },
      {
        onsetS: 10,
        durationS: null,
        text: 'Stimulus right elbow 0.2ms x 15.3mA at 28.5cm from recording site',
      },
      { onsetS: 10, durationS: null, text: 'Response 7.2mV at 7.8ms (55.0m/s)' },
    ]);
    const values = await file.readSamples(file.channels[0], file.segments[1], 0, 1000);
    const expected = (i: number) => ((((37 * i + 11) % 4096) * 200) / 4095 - 100) * 1000;
    for (let i = 0; i < 1000; i++) expect(values[i]).toBeCloseTo(expected(i), 6);
  });
});

describe('openEdf', () => {
  it('reads what was written: rates, units, annotations, values within half a step', async () => {
    const edf = smallEdf();
    const file = await open(smallBytes());
    expect(file.format).toBe('EDF+C');
    expect(file.startedAt).toBe('2024-03-05T10:20:30');
    expect(file.notices).toEqual([]);
    expect(file.channels.map((s) => [s.label, s.unit, s.samplingRateHz])).toEqual([
      ['EEG Fp1-REF', 'uV', 8],
      ['T3', 'uV', 8],
      ['Temp', 'degC', 2],
    ]);
    const [segment] = file.segments;
    const [fp1, t7] = await file.readSignals([file.channels[0], file.channels[1]], segment, 5, 20);
    for (let i = 0; i < 20; i++) {
      expect(Math.abs(fp1[i] - edf.signals[0].samples[5 + i])).toBeLessThanOrEqual(
        0.5 * (200 / 65535) + 1e-9,
      );
      expect(Math.abs(t7[i] - -50)).toBeLessThanOrEqual(0.5 * (200 / 65535) + 1e-5);
    }
    expect((await file.readAnnotations()).annotations).toEqual([
      { onsetS: 0.5, durationS: null, text: 'go' },
      { onsetS: 2.25, durationS: 0.5, text: 'stöp' },
    ]);
  });

  it('reads the same from a Blob', async () => {
    const file = await openEdf(bytesOfBlob(new Blob([smallBytes() as Uint8Array<ArrayBuffer>])));
    const values = await file.readSamples(file.channels[2], file.segments[0], 0, 8);
    for (const value of values) expect(value).toBeCloseTo(37, 2);
  });

  it('starts a file with a subsecond start at its first annotation, and counts onsets from the header', async () => {
    const file = await open(
      smallBytes({ startS: 0.25, annotations: [{ onsetS: 0.75, text: 'x' }] }),
    );
    expect(file.segments[0].startS).toBe(0.25);
    expect((await file.readAnnotations()).annotations[0].onsetS).toBe(0.75);
  });

  it('joins the records of an EDF+D file that follow each other, and parts those that do not', async () => {
    const file = await open(smallBytes({ recordStartsS: [0.5, 1.5, 7, 8] }));
    expect(file.segments).toEqual([
      { startS: 0.5, durationS: 2, firstRecord: 0, recordCount: 2 },
      { startS: 7, durationS: 2, firstRecord: 2, recordCount: 2 },
    ]);
    const values = await file.readSamples(file.channels[0], file.segments[1], 0, 16);
    expect(values[0]).toBeCloseTo(16 - 50, 2);
  });

  it.each([
    ['-1      ', 'record-count-unknown', 4],
    ['????    ', 'record-count-unknown', 4],
    ['9       ', 'truncated', 4],
    ['3       ', 'trailing-bytes', 3],
  ])(
    'with %j as the number of records gives the notice %s and keeps %i records',
    async (text, code, count) => {
      const file = await open(overwrite(smallBytes(), 236, text));
      expect(file.recordCount).toBe(count);
      expect(codes(file.notices)).toEqual([code]);
    },
  );

  it('keeps a truncated file up to its last whole record, with a notice', async () => {
    const bytes = smallBytes();
    const file = await open(bytes.subarray(0, bytes.length - 3));
    expect(file.recordCount).toBe(3);
    expect(file.segments[0].durationS).toBe(3);
    expect(codes(file.notices)).toEqual(['truncated']);
  });

  it('reads several annotation signals', async () => {
    // The second signal's label is made an annotations signal whose samples hold a list.
    const bytes = overwrite(smallBytes(), 256 + 16, 'EDF Annotations ');
    const file = await open(overwrite(bytes, 256 * 5 + 16, '+3\x14second\x14\0\0\0\0\0\0'));
    expect(file.channels.map((signal) => signal.label)).toEqual(['EEG Fp1-REF', 'Temp']);
    const { annotations } = await file.readAnnotations();
    expect(annotations.map((annotation) => annotation.text)).toContain('second');
  });

  it('reads years 85 to 99 as 19xx and 00 to 84 as 20xx, and leaves an impossible date open', async () => {
    expect((await open(overwrite(smallBytes(), 174, '85'))).startedAt).toBe('1985-03-05T10:20:30');
    expect((await open(overwrite(smallBytes(), 174, '84'))).startedAt).toBe('2084-03-05T10:20:30');
    const file = await open(overwrite(smallBytes(), 168, '31.02.24'));
    expect(file.startedAt).toBeNull();
    expect(codes(file.notices)).toEqual(['start-unknown']);
  });

  it('keeps the other signals when one has no usable scale', async () => {
    const digitalMax = 256 + 4 * 128;
    const file = await open(overwrite(smallBytes(), digitalMax, '-32768  '));
    expect(codes(file.notices)).toEqual(['signal-scale']);
    const read = (i: number) => file.readSamples(file.channels[i], file.segments[0], 0, 4);
    await expect(read(0)).rejects.toMatchObject({ name: 'EdfError', code: 'signal-scale' });
    await expect(read(1)).resolves.toHaveLength(4);
  });

  it('keeps Latin-1 annotations that are not UTF-8', async () => {
    const bytes = smallBytes({ annotations: [{ onsetS: 0.5, text: 'o#' }] });
    bytes[bytes.lastIndexOf(0x23)] = 0xf6;
    const { annotations } = await (await open(bytes)).readAnnotations();
    expect(annotations[0].text).toBe('oö');
  });

  it('leaves a malformed annotation list out and says where it stands', async () => {
    const bytes = smallBytes({
      annotations: [
        { onsetS: 0.5, text: 'a' },
        { onsetS: 0.75, text: 'b' },
      ],
    });
    const at = Buffer.from(bytes).indexOf('+0.75');
    const { annotations, notices } = await (
      await open(overwrite(bytes, at, '?'))
    ).readAnnotations();
    expect(annotations.map((annotation) => annotation.text)).toEqual(['a']);
    expect(notices[0].message).toContain(`byte ${at}`);
  });

  it('says when a file marked as continuous has records at other times', async () => {
    const bytes = overwrite(smallBytes({ recordStartsS: [0, 1, 5, 6] }), 192, 'EDF+C');
    const file = await open(bytes);
    expect(file.segments).toHaveLength(1);
    expect(codes((await file.readAnnotations()).notices)).toEqual(['continuous-with-gaps']);
  });

  it('refuses ranges that leave the segment and signals of different rates', async () => {
    const file = await open(smallBytes());
    const [segment] = file.segments;
    await expect(file.readSamples(file.channels[0], segment, 30, 3)).rejects.toThrow(
      /30 to 33 leave a segment of 32/,
    );
    await expect(
      file.readSignals([file.channels[0], file.channels[2]], segment, 0, 1),
    ).rejects.toThrow(/"Temp" has 2 Hz/);
  });
});

describe('openEdf refuses, with the offset,', () => {
  const cases: [string, (bytes: Uint8Array) => Uint8Array, string, number][] = [
    ['an empty file', () => new Uint8Array(0), 'too-short', 0],
    ['a file that is no EDF', (b) => overwrite(b, 0, 'RIFF'), 'not-edf', 0],
    ['a BDF file', (b) => Uint8Array.from([255, ...b.subarray(1)]), 'not-edf', 0],
    ['a header that ends early', (b) => b.subarray(0, 700), 'too-short', 700],
    ['no signals', (b) => overwrite(b, 252, '0   '), 'header-number', 252],
    [
      'a header size that contradicts the signals',
      (b) => overwrite(b, 184, '512     '),
      'header-size',
      184,
    ],
    [
      'a record duration that is no number',
      (b) => overwrite(b, 244, 'one     '),
      'record-duration',
      244,
    ],
    ['records of 0 s with samples', (b) => overwrite(b, 244, '0       '), 'record-duration', 244],
    [
      'an absurd number of samples',
      (b) => overwrite(b, 256 + 4 * 216, '99999999'),
      'no-records',
      256,
    ],
    [
      'a negative number of samples',
      (b) => overwrite(b, 256 + 4 * 216, '-8      '),
      'header-number',
      256 + 4 * 216,
    ],
    [
      'an EDF+D record without a time',
      (b) => overwrite(overwrite(b, 192, 'EDF+D'), 256 * 5 + 36, '?'),
      'record-time',
      256 * 5 + 36,
    ],
  ];
  it.each(cases)('%s', async (_, change, code, offset) => {
    const error = await failure(change(smallBytes()));
    expect(error).toMatchObject({ code, offset });
    expect(error.message).toContain(`byte ${offset}`);
  });
});
