import type { ByteSource } from './byte-source';
import { EdfError, type Notice } from './edf-error';
import { fieldInteger, fieldNumber, fieldText } from './edf-fields';
import { readSignalHeaders, type EdfSignal } from './edf-signals';

export type EdfFormat = 'EDF' | 'EDF+C' | 'EDF+D';

/** What the header says, checked, before any record is read. */
export interface EdfHeader {
  format: EdfFormat;
  /** The two identification fields as they stand; see `identificationOf`. */
  patient: string;
  recording: string;
  /** Wall-clock start, `YYYY-MM-DDThh:mm:ss` without a time zone, or null where it is unreadable. */
  startedAt: string | null;
  headerBytes: number;
  /** Whole records that are in the file. */
  recordCount: number;
  recordDurationS: number;
  recordBytes: number;
  signals: EdfSignal[];
  notices: Notice[];
}

const FIXED_BYTES = 256;
const SIGNAL_BYTES = 256;

/**
 * Reads and checks the header (Kemp et al. 1992; EDF+: Kemp and Olivan 2003). Allocates no more
 * than the header's own size, which is checked against the file's first.
 * @throws EdfError naming the field and its offset.
 */
export async function readHeader(source: ByteSource): Promise<EdfHeader> {
  if (source.size < FIXED_BYTES) {
    throw new EdfError(
      'too-short',
      source.size,
      `the file has ${source.size} bytes, and an EDF header has at least ${FIXED_BYTES}`,
    );
  }
  const fixed = await source.read(0, FIXED_BYTES);
  checkVersion(fixed);
  const signalCount = fieldInteger(fixed, {
    name: 'number of signals',
    offset: 252,
    width: 4,
    least: 1,
    most: 9999,
  });
  const headerBytes = checkHeaderSize(fixed, signalCount, source.size);
  const header = await source.read(0, headerBytes);
  const notices: Notice[] = [];
  const recordDurationS = readRecordDuration(fixed);
  const format = readFormat(fixed);
  const signals = readSignalHeaders(header, signalCount, { recordDurationS, format, notices });
  const recordBytes = signals.reduce((sum, signal) => sum + signal.samplesPerRecord, 0) * 2;
  return {
    format,
    patient: fieldText(fixed, 8, 80),
    recording: fieldText(fixed, 88, 80),
    startedAt: readStart(fixed, notices),
    headerBytes,
    recordCount: countRecords(fixed, source.size - headerBytes, recordBytes, notices),
    recordDurationS,
    recordBytes,
    signals,
    notices,
  };
}

function checkVersion(fixed: Uint8Array): void {
  if (fixed[0] === 0xff) {
    throw new EdfError('not-edf', 0, 'this is a 24-bit BDF file; export it as EDF (16 bit)');
  }
  if (fieldText(fixed, 0, 8) !== '0') {
    throw new EdfError('not-edf', 0, 'an EDF file begins with the version "0", and this does not');
  }
}

function checkHeaderSize(fixed: Uint8Array, signalCount: number, size: number): number {
  const expected = FIXED_BYTES + SIGNAL_BYTES * signalCount;
  const stated = fieldNumber(fixed, 184, 8);
  if (stated !== expected) {
    throw new EdfError(
      'header-size',
      184,
      `the header says it has ${JSON.stringify(fieldText(fixed, 184, 8))} bytes, but ` +
        `${signalCount} signals need ${expected}`,
    );
  }
  if (expected > size) {
    throw new EdfError(
      'too-short',
      size,
      `the header of ${signalCount} signals needs ${expected} bytes, and the file ends at ${size}`,
    );
  }
  return expected;
}

function readFormat(fixed: Uint8Array): EdfFormat {
  const reserved = fieldText(fixed, 192, 44);
  if (reserved.startsWith('EDF+C')) return 'EDF+C';
  return reserved.startsWith('EDF+D') ? 'EDF+D' : 'EDF';
}

function readRecordDuration(fixed: Uint8Array): number {
  const durationS = fieldNumber(fixed, 244, 8);
  const isPlausible =
    durationS === 0 || (durationS !== null && durationS >= 1e-6 && durationS <= 1e7);
  if (durationS === null || !isPlausible) {
    throw new EdfError(
      'record-duration',
      244,
      `the header field "duration of a record" holds ` +
        `${JSON.stringify(fieldText(fixed, 244, 8))} instead of 0 or 0.000001 to 10,000,000 seconds`,
    );
  }
  return durationS;
}

/** Years 85 to 99 are 19xx, 00 to 84 are 20xx (EDF+, additional specification 2). */
function readStart(fixed: Uint8Array, notices: Notice[]): string | null {
  const dateText = fieldText(fixed, 168, 8);
  const timeText = fieldText(fixed, 176, 8);
  const date = /^(\d\d?)[.\-/](\d\d?)[.\-/](\d\d)$/.exec(dateText);
  const time = /^(\d\d?)[.:](\d\d?)[.:](\d\d?)$/.exec(timeText);
  if (date && time) {
    const [day, month, yy] = date.slice(1).map(Number);
    const [hour, minute, second] = time.slice(1).map(Number);
    const year = yy >= 85 ? 1900 + yy : 2000 + yy;
    const start = new Date(Date.UTC(year, month - 1, day, hour, minute, second));
    const same =
      start.getUTCMonth() === month - 1 &&
      start.getUTCDate() === day &&
      start.getUTCHours() === hour &&
      start.getUTCMinutes() === minute &&
      start.getUTCSeconds() === second;
    if (same) return start.toISOString().slice(0, 19);
  }
  notices.push({
    code: 'start-unknown',
    message: `The start "${dateText} ${timeText}" is not a date and time, and is left open.`,
  });
  return null;
}

function countRecords(
  fixed: Uint8Array,
  dataBytes: number,
  recordBytes: number,
  notices: Notice[],
): number {
  const whole = Math.floor(dataBytes / recordBytes);
  const stated = fieldNumber(fixed, 236, 8);
  const known = stated !== null && Number.isInteger(stated) && stated > 0;
  if (whole === 0) {
    throw new EdfError(
      'no-records',
      256,
      `the file holds no whole data record: one needs ${recordBytes} bytes, and ${dataBytes} ` +
        'follow the header',
    );
  }
  if (!known) {
    notices.push({
      code: 'record-count-unknown',
      message:
        `The header gives ${JSON.stringify(fieldText(fixed, 236, 8))} as the number of records; ` +
        `${whole} were found by the file's size.`,
    });
  }
  const count = known ? Math.min(stated, whole) : whole;
  if (known && stated > whole) {
    notices.push({
      code: 'truncated',
      message:
        `The header promises ${stated} records, but the file ends after ${whole} whole ones; ` +
        'these are kept.',
    });
  } else if (dataBytes > count * recordBytes) {
    notices.push({
      code: 'trailing-bytes',
      message:
        `${dataBytes - count * recordBytes} bytes after record ${count} are no whole record that ` +
        'the header counts, and are left out.',
    });
  }
  return count;
}
