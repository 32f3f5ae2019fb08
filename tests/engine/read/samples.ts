import { type ByteSource, bytesOf, writeEdf, type WritableEdf } from '../../../workers/engine/read';

/** A small recording with two rates and annotations, for tests to vary. */
export function smallEdf(changes: Partial<WritableEdf> = {}): WritableEdf {
  const ramp = (count: number, step: number) =>
    Float32Array.from({ length: count }, (_, i) => i * step - 50);
  return {
    startedAt: '2024-03-05T10:20:30',
    recordDurationS: 1,
    signals: [
      {
        label: 'EEG Fp1-REF',
        unit: 'uV',
        physicalMin: -100,
        physicalMax: 100,
        samplesPerRecord: 8,
        samples: ramp(32, 1),
      },
      {
        label: 'T3',
        unit: 'mV',
        physicalMin: -0.1,
        physicalMax: 0.1,
        samplesPerRecord: 8,
        samples: ramp(32, 0).map((v) => v / 1000),
      },
      {
        label: 'Temp',
        unit: 'degC',
        physicalMin: 20,
        physicalMax: 40,
        samplesPerRecord: 2,
        samples: ramp(8, 0).map(() => 37),
      },
    ],
    annotations: [
      { onsetS: 0.5, text: 'go' },
      { onsetS: 2.25, durationS: 0.5, text: 'stöp' },
    ],
    ...changes,
  };
}

export function smallBytes(changes: Partial<WritableEdf> = {}): Uint8Array {
  return writeEdf(smallEdf(changes));
}

/** The same bytes with ASCII text written over them. */
export function overwrite(bytes: Uint8Array, offset: number, text: string): Uint8Array {
  const changed = bytes.slice();
  changed.set(new TextEncoder().encode(text), offset);
  return changed;
}

/** Counts the bytes that are read, so that tests can bound them. */
export function countingSource(
  bytes: Uint8Array,
): ByteSource & { bytesRead: number; largest: number } {
  const inner = bytesOf(bytes);
  return {
    size: bytes.length,
    bytesRead: 0,
    largest: 0,
    read(offset, length) {
      this.bytesRead += length;
      this.largest = Math.max(this.largest, length);
      return inner.read(offset, length);
    },
  };
}
