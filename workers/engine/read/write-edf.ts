/** A signal to be written. All signals cover the same time. */
export interface WritableSignal {
  label: string;
  transducer?: string;
  unit: string;
  physicalMin: number;
  physicalMax: number;
  prefilter?: string;
  samplesPerRecord: number;
  /** Values in `unit`, a whole number of records; beyond the limits they are clipped. */
  samples: Float32Array | Float64Array;
}

export interface WritableEdf {
  /** The EDF+ identification fields; unknown throughout by default. */
  patient?: string;
  recording?: string;
  /** `YYYY-MM-DDThh:mm:ss`, years 1985 to 2084. */
  startedAt: string;
  recordDurationS: number;
  signals: WritableSignal[];
  annotations: { onsetS: number; durationS?: number | null; text: string }[];
  /**
   * Start of each record, seconds from `startedAt`; makes an EDF+D file. Without it the file is
   * EDF+C, and starts `startS` after the whole second.
   */
  recordStartsS?: number[];
  startS?: number;
}

const DIGITAL_MIN = -32768;
const DIGITAL_MAX = 32767;
const MONTHS = 'JAN FEB MAR APR MAY JUN JUL AUG SEP OCT NOV DEC'.split(' ');
const utf8 = new TextEncoder();

/**
 * An EDF+ file (Kemp and Olivan 2003) as a whole. 16-bit samples over the physical limits as the
 * header can state them (8 characters).
 * @throws RangeError naming the field that cannot be written.
 */
export function writeEdf(edf: WritableEdf): Uint8Array {
  const chunks = [...edfChunks(edf)];
  const file = new Uint8Array(chunks.reduce((sum, chunk) => sum + chunk.length, 0));
  let at = 0;
  for (const chunk of chunks) {
    file.set(chunk, at);
    at += chunk.length;
  }
  return file;
}

/** The same file piece by piece: the header, then each record. */
export function* edfChunks(edf: WritableEdf): Generator<Uint8Array> {
  const recordCount = countRecords(edf);
  const starts =
    edf.recordStartsS ??
    Array.from({ length: recordCount }, (_, i) => (edf.startS ?? 0) + i * edf.recordDurationS);
  const lists = annotationLists(edf, starts);
  const annotationBytes = lists.reduce(
    (most, list) => Math.max(most, list.length + (list.length % 2)),
    16,
  );
  yield encodeHeader(edf, recordCount, annotationBytes / 2);
  const scales = edf.signals.map(scaleOf);
  for (let record = 0; record < recordCount; record++) {
    yield encodeRecord(edf, scales, { record, annotationBytes, list: lists[record] });
  }
}

function countRecords(edf: WritableEdf): number {
  const counts = edf.signals.map((signal) => signal.samples.length / signal.samplesPerRecord);
  const count = counts[0] ?? edf.recordStartsS?.length ?? 1;
  counts.forEach((other, i) => {
    if (other !== count || !Number.isInteger(other)) {
      throw new RangeError(
        `writeEdf: signal "${edf.signals[i].label}" has ${other} records of samples, others ${count}`,
      );
    }
  });
  if (edf.recordStartsS && edf.recordStartsS.length !== count) {
    throw new RangeError(
      `writeEdf: recordStartsS has ${edf.recordStartsS.length} entries for ${count} records`,
    );
  }
  return count;
}

/** Each record's own time, then the annotations that begin in it (or before the first). */
function annotationLists(edf: WritableEdf, starts: number[]): Uint8Array[] {
  const texts = starts.map((startS) => `${stamp(startS)}\x14\x14\0`);
  for (const { onsetS, durationS, text } of edf.annotations) {
    if (['\0', '\x14', '\x15'].some((mark) => text.includes(mark))) {
      throw new RangeError(
        `writeEdf: annotation ${JSON.stringify(text)} holds a control character`,
      );
    }
    let record = starts.findLastIndex((startS) => startS <= onsetS);
    if (record < 0) record = 0;
    const duration = durationS == null ? '' : `\x15${plain(durationS)}`;
    texts[record] += `${stamp(onsetS)}${duration}\x14${text}\x14\0`;
  }
  return texts.map((text) => utf8.encode(text));
}

/** A number without an exponent, to the nanosecond. */
function plain(value: number): string {
  return value.toFixed(9).replace(/\.?0+$/, '');
}

function stamp(onsetS: number): string {
  return onsetS < 0 ? plain(onsetS) : `+${plain(onsetS)}`;
}

function encodeHeader(
  edf: WritableEdf,
  recordCount: number,
  annotationSamples: number,
): Uint8Array {
  const time = /^(\d{4})-(\d\d)-(\d\d)T(\d\d):(\d\d):(\d\d)$/.exec(edf.startedAt);
  if (!time || Number(time[1]) < 1985 || Number(time[1]) > 2084) {
    throw new RangeError(`writeEdf: startedAt is "${edf.startedAt}", not YYYY-MM-DDThh:mm:ss`);
  }
  const [, year, month, day, hour, minute, second] = time;
  const date = `${day}-${MONTHS[Number(month) - 1]}-${year}`;
  const signalCount = edf.signals.length + 1;
  const parts = [
    field('version', '0', 8),
    field('patient', edf.patient ?? 'X X X X', 80),
    field('recording', edf.recording ?? `Startdate ${date} X X X`, 80),
    field('start date', `${day}.${month}.${year.slice(2)}`, 8),
    field('start time', `${hour}.${minute}.${second}`, 8),
    field('header bytes', String(256 * (signalCount + 1)), 8),
    field('reserved', edf.recordStartsS ? 'EDF+D' : 'EDF+C', 44),
    field('number of records', String(recordCount), 8),
    field('duration of a record', number8('recordDurationS', edf.recordDurationS), 8),
    field('number of signals', String(signalCount), 4),
  ];
  const annotations = ['EDF Annotations', '', '', '-1', '1'];
  const blocks: [string, number, string[]][] = [
    ['label', 16, [...edf.signals.map((s) => s.label), annotations[0]]],
    ['transducer', 80, [...edf.signals.map((s) => s.transducer ?? ''), '']],
    ['unit', 8, [...edf.signals.map((s) => s.unit.replace(/^[\u00b5\u03bc]/, 'u')), '']],
    ['physicalMin', 8, [...edf.signals.map((s) => number8('physicalMin', s.physicalMin)), '-1']],
    ['physicalMax', 8, [...edf.signals.map((s) => number8('physicalMax', s.physicalMax)), '1']],
    ['digital minimum', 8, Array.from({ length: signalCount }, () => String(DIGITAL_MIN))],
    ['digital maximum', 8, Array.from({ length: signalCount }, () => String(DIGITAL_MAX))],
    ['prefilter', 80, [...edf.signals.map((s) => s.prefilter ?? ''), '']],
    [
      'samplesPerRecord',
      8,
      [...edf.signals.map((s) => String(s.samplesPerRecord)), String(annotationSamples)],
    ],
    ['reserved', 32, Array.from({ length: signalCount }, () => '')],
  ];
  for (const [name, width, values] of blocks) {
    for (const value of values) parts.push(field(name, value, width));
  }
  return utf8.encode(parts.join(''));
}

/** Printable ASCII, padded with spaces to its width. */
function field(name: string, text: string, width: number): string {
  if (text.length > width || !/^[ -~]*$/.test(text)) {
    throw new RangeError(
      `writeEdf: ${name} "${text}" is not ${width} or fewer printable ASCII characters`,
    );
  }
  return text.padEnd(width);
}

/** The nearest number that 8 characters can state. */
function number8(name: string, value: number): string {
  for (let digits = 17; digits > 0; digits--) {
    const text = String(Number(value.toPrecision(digits)));
    if (text.length <= 8 && Number.isFinite(value)) return text;
  }
  throw new RangeError(`writeEdf: ${name} ${value} does not fit into 8 characters`);
}

function scaleOf(signal: WritableSignal): { physicalMin: number; stepsPerUnit: number } {
  const physicalMin = Number(number8('physicalMin', signal.physicalMin));
  const physicalMax = Number(number8('physicalMax', signal.physicalMax));
  if (!(physicalMax > physicalMin)) {
    throw new RangeError(
      `writeEdf: signal "${signal.label}" has physical limits ${physicalMin} to ${physicalMax}`,
    );
  }
  return { physicalMin, stepsPerUnit: (DIGITAL_MAX - DIGITAL_MIN) / (physicalMax - physicalMin) };
}

function encodeRecord(
  edf: WritableEdf,
  scales: { physicalMin: number; stepsPerUnit: number }[],
  place: { record: number; annotationBytes: number; list: Uint8Array },
): Uint8Array {
  const samples = edf.signals.reduce((sum, signal) => sum + signal.samplesPerRecord, 0);
  const bytes = new Uint8Array(samples * 2 + place.annotationBytes);
  const view = new DataView(bytes.buffer);
  let at = 0;
  edf.signals.forEach((signal, s) => {
    const { physicalMin, stepsPerUnit } = scales[s];
    const first = place.record * signal.samplesPerRecord;
    for (let i = 0; i < signal.samplesPerRecord; i++, at += 2) {
      const digital =
        Math.round((signal.samples[first + i] - physicalMin) * stepsPerUnit) + DIGITAL_MIN;
      view.setInt16(at, Math.min(DIGITAL_MAX, Math.max(DIGITAL_MIN, digital)), true);
    }
  });
  bytes.set(place.list, at);
  return bytes;
}
