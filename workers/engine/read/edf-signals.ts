import { EdfError, type Notice } from './edf-error';
import { fieldInteger, fieldNumber, fieldText } from './edf-fields';
import type { EdfFormat } from './edf-header';
import { microvoltsIn } from './units';

/** One signal of an EDF file. */
export interface EdfSignal {
  /** Its place among all signals of the file. */
  index: number;
  label: string;
  transducer: string;
  /** The physical dimension as it stands in the file. */
  dimension: string;
  /** Unit of the values that are read: "uV" for every spelling of voltage, else the dimension. */
  unit: string;
  /** In the file's dimension. */
  physicalMin: number;
  physicalMax: number;
  digitalMin: number;
  digitalMax: number;
  prefilter: string;
  samplesPerRecord: number;
  /** 0 in a file of annotations alone, whose records have no duration. */
  samplingRateHz: number;
  isAnnotation: boolean;
  /** Samples (16 bit) of a record that stand before this signal's. */
  firstInRecord: number;
  /**
   * value = (digital - digitalMin) * perStep + least, in `unit`; null where the header gives no
   * usable scale, and the signal cannot be read.
   */
  scale: { perStep: number; least: number } | null;
}

interface Context {
  recordDurationS: number;
  format: EdfFormat;
  notices: Notice[];
}

/** Reads the signals' part of the header: each field is a block over all signals. */
export function readSignalHeaders(
  header: Uint8Array,
  signalCount: number,
  context: Context,
): EdfSignal[] {
  const signals: EdfSignal[] = [];
  let firstInRecord = 0;
  for (let index = 0; index < signalCount; index++) {
    const signal = readSignal(header, signalCount, index, context);
    signal.firstInRecord = firstInRecord;
    firstInRecord += signal.samplesPerRecord;
    signals.push(signal);
  }
  if (context.format === 'EDF' && signals.some((signal) => signal.isAnnotation)) {
    context.notices.push({
      code: 'annotations-in-plain-edf',
      message: 'The file is marked as plain EDF, but has annotations; they are read as in EDF+.',
    });
  }
  return signals;
}

function readSignal(
  header: Uint8Array,
  signalCount: number,
  index: number,
  context: Context,
): EdfSignal {
  const at = (before: number, width: number) => 256 + signalCount * before + index * width;
  const text = (before: number, width: number) => fieldText(header, at(before, width), width);
  const number = (before: number) => fieldNumber(header, at(before, 8), 8);
  const label = text(0, 16);
  const isAnnotation = label === 'EDF Annotations';
  const samplesPerRecord = fieldInteger(header, {
    name: `samples in a record of signal ${index + 1} "${label}"`,
    offset: at(216, 8),
    width: 8,
    least: 1,
    most: 99_999_999,
  });
  if (context.recordDurationS === 0 && !isAnnotation) {
    throw new EdfError(
      'record-duration',
      244,
      `records of 0 s cannot hold samples, but signal ${index + 1} "${label}" has ` +
        `${samplesPerRecord} in each`,
    );
  }
  const dimension = text(96, 8);
  const microvolts = microvoltsIn(dimension);
  const limits = {
    physicalMin: number(104) ?? NaN,
    physicalMax: number(112) ?? NaN,
    digitalMin: number(120) ?? NaN,
    digitalMax: number(128) ?? NaN,
  };
  return {
    index,
    label,
    transducer: text(16, 80),
    dimension,
    unit: microvolts === null ? dimension : 'uV',
    ...limits,
    prefilter: text(136, 80),
    samplesPerRecord,
    samplingRateHz: rateOf(samplesPerRecord, context.recordDurationS),
    isAnnotation,
    firstInRecord: 0,
    scale: isAnnotation ? null : scaleOf(label, limits, microvolts ?? 1, context.notices),
  };
}

/** Takes the rounding of the division off rates that are whole numbers. */
function rateOf(samples: number, durationS: number): number {
  if (durationS === 0) return 0;
  const rate = samples / durationS;
  const whole = Math.round(rate);
  return Math.abs(rate - whole) <= 1e-9 * rate ? whole : rate;
}

function scaleOf(
  label: string,
  limits: { physicalMin: number; physicalMax: number; digitalMin: number; digitalMax: number },
  factor: number,
  notices: Notice[],
): EdfSignal['scale'] {
  const { physicalMin, physicalMax, digitalMin, digitalMax } = limits;
  const perStep = ((physicalMax - physicalMin) / (digitalMax - digitalMin)) * factor;
  // Equal limits give 0 or infinity, and limits that are no numbers give NaN.
  if (!Number.isFinite(perStep) || perStep === 0) {
    notices.push({
      code: 'signal-scale',
      message:
        `Signal "${label}" has no usable scale (digital ${digitalMin} to ${digitalMax}, ` +
        `physical ${physicalMin} to ${physicalMax}) and cannot be analysed.`,
    });
    return null;
  }
  return { perStep, least: physicalMin * factor };
}
