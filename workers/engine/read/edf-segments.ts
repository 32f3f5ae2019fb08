import type { ByteSource } from './byte-source';
import { recordOnset } from './edf-annotations';
import { walkBlocks } from './edf-blocks';
import { EdfError, type Notice } from './edf-error';
import type { EdfHeader } from './edf-header';

/** A stretch of records without a gap. Times count from the header's start. */
export interface EdfSegment {
  startS: number;
  durationS: number;
  firstRecord: number;
  recordCount: number;
}

const MOST_SEGMENTS = 100_000;

/**
 * The stretches without a gap. In EDF+ the first list of a record's first annotations block says
 * when it starts; the first record's fraction of a second counts from the header's whole second.
 * @throws EdfError when a discontinuous file does not say when a record starts.
 */
export async function findSegments(
  source: ByteSource,
  header: EdfHeader,
  notices: Notice[],
): Promise<EdfSegment[]> {
  if (header.recordDurationS === 0) return [];
  if (header.format === 'EDF+D') return discontinuous(source, header, notices);
  const startS = header.format === 'EDF' ? 0 : await firstStart(source, header, notices);
  const { recordCount, recordDurationS } = header;
  return [{ startS, durationS: recordCount * recordDurationS, firstRecord: 0, recordCount }];
}

async function firstStart(
  source: ByteSource,
  header: EdfHeader,
  notices: Notice[],
): Promise<number> {
  const signal = header.signals.find((candidate) => candidate.isAnnotation);
  const onsetS =
    signal &&
    recordOnset(
      await source.read(header.headerBytes + signal.firstInRecord * 2, signal.samplesPerRecord * 2),
    );
  if (onsetS === null || onsetS === undefined) {
    notices.push({
      code: 'start-unstated',
      message: 'The first record does not say when it starts; it is taken as the header’s start.',
    });
    return 0;
  }
  if (onsetS < 0 || onsetS >= 1) {
    notices.push({
      code: 'start-shifted',
      message: `The first record starts ${onsetS} s after the header’s start, not within a second of it.`,
    });
  }
  return onsetS;
}

async function discontinuous(
  source: ByteSource,
  header: EdfHeader,
  notices: Notice[],
): Promise<EdfSegment[]> {
  const { recordDurationS } = header;
  if (!header.signals.some((signal) => signal.isAnnotation)) {
    throw new EdfError(
      'record-time',
      192,
      'the file is marked EDF+D, but has no "EDF Annotations" signal that says when records start',
    );
  }
  const fastest = Math.max(...header.signals.map((signal) => signal.samplesPerRecord));
  // Half a sample of the fastest signal: less cannot move any sample to its neighbour's place.
  const toleranceS = recordDurationS / fastest / 2;
  const segments: EdfSegment[] = [];
  let overlaps = 0;
  let previousS = -Infinity;
  await walkBlocks(source, header, (block, { record, signal, offset }) => {
    if (signal > 0) return true;
    const startS = recordOnset(block);
    if (startS === null || startS <= previousS) {
      const what =
        startS === null ? 'does not say when it starts' : 'starts before the one before it';
      throw new EdfError('record-time', offset, `record ${record + 1} of the EDF+D file ${what}`);
    }
    previousS = startS;
    const current = segments[segments.length - 1];
    const expectedS = current ? current.startS + current.durationS : -Infinity;
    if (Math.abs(startS - expectedS) <= toleranceS) {
      current.recordCount++;
      current.durationS = current.recordCount * recordDurationS;
      return true;
    }
    if (startS < expectedS) overlaps++;
    if (segments.length === MOST_SEGMENTS) {
      throw new EdfError('too-many-gaps', offset, `the file has more than ${MOST_SEGMENTS} gaps`);
    }
    segments.push({ startS, durationS: recordDurationS, firstRecord: record, recordCount: 1 });
    return true;
  });
  if (overlaps > 0) {
    notices.push({
      code: 'records-overlap',
      message: `${overlaps} records start before the one before them ends; each begins a new segment.`,
    });
  }
  if (segments.length > 1) {
    notices.push({
      code: 'gaps',
      message:
        segments.length === 2
          ? 'The recording has a gap; no epoch crosses it.'
          : `The recording has ${segments.length - 1} gaps; no epoch crosses one.`,
    });
  }
  return segments;
}
