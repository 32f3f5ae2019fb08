import type { ByteSource } from './byte-source';
import { mostAnnotations, walkAnnotations, type AnnotationList } from './edf-annotations';
import { walkBlocks } from './edf-blocks';
import { EdfError, type Notice } from './edf-error';
import { readHeader, type EdfFormat, type EdfHeader } from './edf-header';
import { findSegments, type EdfSegment } from './edf-segments';
import type { EdfSignal } from './edf-signals';

export interface EdfAnnotation {
  /** Seconds from the header's start. */
  onsetS: number;
  durationS: number | null;
  text: string;
}

const CHUNK_BYTES = 8 * 1024 * 1024;

/**
 * Opens an EDF, EDF+C or EDF+D file. Reads the header and, for EDF+D, each record's start.
 * @throws EdfError for whatever keeps the file from being read, with the offset.
 */
export async function openEdf(source: ByteSource): Promise<EdfFile> {
  const header = await readHeader(source);
  const segments = await findSegments(source, header, header.notices);
  return new EdfFile(source, header, segments);
}

/** An open EDF file: its facts, and its samples on demand. Holds no samples itself. */
export class EdfFile {
  readonly format: EdfFormat;
  readonly patient: string;
  readonly recording: string;
  readonly startedAt: string | null;
  readonly recordCount: number;
  readonly recordDurationS: number;
  /** All signals in the file's order, annotations among them. */
  readonly signals: EdfSignal[];
  /** The signals that are no annotations, in the file's order. */
  readonly channels: EdfSignal[];
  readonly notices: Notice[];
  /** Recorded seconds, gaps not counted. */
  readonly durationS: number;
  /** Where the last segment ends, seconds from the header's start. */
  readonly endS: number;

  constructor(
    private readonly source: ByteSource,
    private readonly header: EdfHeader,
    readonly segments: EdfSegment[],
  ) {
    this.format = header.format;
    this.patient = header.patient;
    this.recording = header.recording;
    this.startedAt = header.startedAt;
    this.recordCount = header.recordCount;
    this.recordDurationS = header.recordDurationS;
    this.signals = header.signals;
    this.channels = header.signals.filter((signal) => !signal.isAnnotation);
    this.notices = header.notices;
    this.durationS = header.recordCount * header.recordDurationS;
    const last = segments[segments.length - 1];
    this.endS = last ? last.startS + last.durationS : 0;
  }

  /**
   * All annotations in order of onset, those without text left out, with notices about lists that
   * could not be read and about record times that contradict a file marked as continuous.
   * @throws EdfError `too-many-annotations` above 500,000.
   */
  async readAnnotations(): Promise<{ annotations: EdfAnnotation[]; notices: Notice[] }> {
    const annotations: EdfAnnotation[] = [];
    const odd = new OddLists(this.header, this.segments);
    await walkBlocks(this.source, this.header, (block, place) => {
      let isFirst = place.signal === 0;
      walkAnnotations(block, (list, at) => {
        if (list === null) odd.malformed(place.offset + at);
        else {
          if (isFirst) odd.recordTime(place.record, list);
          collect(annotations, list, place.offset + at);
        }
        isFirst = false;
        return true;
      });
      return true;
    });
    annotations.sort((a, b) => a.onsetS - b.onsetS);
    return { annotations, notices: odd.notices() };
  }

  /** Samples of `signal` in one segment. */
  samplesIn(signal: EdfSignal, segment: EdfSegment): number {
    return segment.recordCount * signal.samplesPerRecord;
  }

  /**
   * `count` values of one signal from `firstSample` of a segment, in `signal.unit`.
   * @throws RangeError when the range leaves the segment; EdfError `signal-scale`.
   */
  async readSamples(
    signal: EdfSignal,
    segment: EdfSegment,
    firstSample: number,
    count: number,
  ): Promise<Float64Array> {
    return (await this.readSignals([signal], segment, firstSample, count))[0];
  }

  /**
   * The same range of several signals with one sampling rate, each record read once. The result
   * is [signal][sample]; memory is 8 bytes a value and at most 8 MiB of records at a time.
   * @throws RangeError when the rates differ or the range leaves the segment; EdfError
   * `signal-scale` when a signal has no usable scale.
   */
  async readSignals(
    signals: EdfSignal[],
    segment: EdfSegment,
    firstSample: number,
    count: number,
  ): Promise<Float64Array[]> {
    this.checkRange(signals, segment, firstSample, count);
    const values = signals.map(() => new Float64Array(count));
    if (count === 0 || signals.length === 0) return values;
    const perRecord = signals[0].samplesPerRecord;
    const firstRecord = Math.floor(firstSample / perRecord);
    const endRecord = Math.ceil((firstSample + count) / perRecord);
    const perChunk = Math.max(1, Math.floor(CHUNK_BYTES / this.header.recordBytes));
    for (let record = firstRecord; record < endRecord; record += perChunk) {
      const records = Math.min(perChunk, endRecord - record);
      const chunk = await this.readRecords(segment.firstRecord + record, records);
      const width = this.header.recordBytes / 2;
      for (let r = 0; r < records; r++) {
        const skip = (record + r) * perRecord - firstSample;
        const from = Math.max(0, -skip);
        const to = Math.min(perRecord, count - skip);
        for (let i = 0; i < signals.length; i++) {
          const at = r * width + signals[i].firstInRecord;
          convert(chunk.subarray(at + from, at + to), signals[i], values[i], skip + from);
        }
      }
    }
    return values;
  }

  /**
   * Whole records as the digital values stand in the file: [record][sample of the record], where
   * a signal's samples begin at its `firstInRecord`.
   */
  async readRecords(firstRecord: number, count: number): Promise<Int16Array> {
    const { headerBytes, recordBytes } = this.header;
    const offset = headerBytes + firstRecord * recordBytes;
    const read = await this.source.read(offset, count * recordBytes);
    // EDF is little-endian, and so is every machine that runs a browser or Node today.
    const aligned = read.byteOffset % 2 === 0 ? read : read.slice();
    return new Int16Array(aligned.buffer, aligned.byteOffset, aligned.byteLength / 2);
  }

  private checkRange(
    signals: EdfSignal[],
    segment: EdfSegment,
    firstSample: number,
    count: number,
  ): void {
    for (const signal of signals) {
      if (signal.samplesPerRecord !== signals[0].samplesPerRecord) {
        throw new RangeError(
          `readSignals: "${signal.label}" has ${signal.samplingRateHz} Hz, but ` +
            `"${signals[0].label}" ${signals[0].samplingRateHz} Hz`,
        );
      }
      if (signal.scale === null) {
        throw new EdfError(
          'signal-scale',
          256 + this.signals.length * 104 + signal.index * 8,
          `signal "${signal.label}" has no usable scale`,
        );
      }
    }
    const samples = signals.length > 0 ? this.samplesIn(signals[0], segment) : 0;
    const whole = Number.isInteger(firstSample) && Number.isInteger(count);
    if (!whole || firstSample < 0 || count < 0 || firstSample + count > samples) {
      throw new RangeError(
        `readSignals: samples ${firstSample} to ${firstSample + count} leave a segment of ${samples}`,
      );
    }
  }
}

/** (digital - digital_min) * (physical_max - physical_min) / (digital_max - digital_min) + physical_min. */
function convert(digital: Int16Array, signal: EdfSignal, out: Float64Array, at: number): void {
  const { perStep, least } = signal.scale!;
  const { digitalMin } = signal;
  for (let i = 0; i < digital.length; i++)
    out[at + i] = (digital[i] - digitalMin) * perStep + least;
}

function collect(annotations: EdfAnnotation[], list: AnnotationList, offset: number): void {
  for (const text of list.texts) {
    if (annotations.length === mostAnnotations) {
      throw new EdfError(
        'too-many-annotations',
        offset,
        `the file has more than ${mostAnnotations} annotations`,
      );
    }
    annotations.push({ onsetS: list.onsetS, durationS: list.durationS, text });
  }
}

/** Counts what is odd about the annotations, so that each kind makes one notice. */
class OddLists {
  private malformedCount = 0;
  private firstMalformed = 0;
  private shiftedCount = 0;
  private firstShifted = 0;

  constructor(
    private readonly header: EdfHeader,
    private readonly segments: EdfSegment[],
  ) {}

  malformed(offset: number): void {
    if (this.malformedCount++ === 0) this.firstMalformed = offset;
  }

  recordTime(record: number, list: AnnotationList): void {
    if (this.header.format !== 'EDF+C' || this.segments.length === 0) return;
    const expectedS = this.segments[0].startS + record * this.header.recordDurationS;
    const isShifted = Math.abs(list.onsetS - expectedS) > this.header.recordDurationS / 2;
    if (isShifted && this.shiftedCount++ === 0) this.firstShifted = record;
  }

  notices(): Notice[] {
    const notices: Notice[] = [];
    if (this.malformedCount > 0) {
      notices.push({
        code: 'annotations-unreadable',
        message:
          `${this.malformedCount} annotation lists could not be read and are left out, the first ` +
          `at byte ${this.firstMalformed}.`,
      });
    }
    if (this.shiftedCount > 0) {
      notices.push({
        code: 'continuous-with-gaps',
        message:
          `The file is marked as continuous (EDF+C), but ${this.shiftedCount} records say another ` +
          `start, the first is record ${this.firstShifted + 1}; it is read as continuous.`,
      });
    }
    return notices;
  }
}
