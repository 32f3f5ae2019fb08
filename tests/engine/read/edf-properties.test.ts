import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { bytesOf, EdfError, factsOf, openEdf, writeEdf } from '../../../workers/engine/read';
import { countingSource, smallBytes } from './samples';

/** Reads all there is to read; returns the error where it is one that the reader announces. */
async function readAll(bytes: Uint8Array): Promise<EdfError | null> {
  const source = countingSource(bytes);
  try {
    const file = await openEdf(source);
    const { facts } = await factsOf(file, { sha256: '0'.repeat(64), name: 'x.edf' });
    expect(facts.channels).toHaveLength(file.channels.length);
    for (const segment of file.segments) {
      for (const channel of file.channels) {
        const count = file.samplesIn(channel, segment);
        const values = await file.readSamples(channel, segment, 0, count);
        expect(values.every((value) => Number.isFinite(value))).toBe(true);
      }
    }
    // Header twice, record times and annotations once each, samples once a channel.
    expect(source.bytesRead).toBeLessThanOrEqual(bytes.length * (4 + file.channels.length));
    return null;
  } catch (error) {
    if (!(error instanceof EdfError)) throw error;
    expect(error.offset).toBeGreaterThanOrEqual(0);
    return error;
  } finally {
    expect(source.largest).toBeLessThanOrEqual(bytes.length);
  }
}

describe('the EDF reader', () => {
  it('ends with a result or an EdfError for arbitrary bytes', async () => {
    await fc.assert(
      fc.asyncProperty(fc.uint8Array({ maxLength: 2000 }), async (bytes) => {
        await readAll(bytes);
      }),
      { numRuns: 300 },
    );
  });

  it('ends with a result or an EdfError for valid files with mutated bytes', async () => {
    const bases = [smallBytes(), smallBytes({ recordStartsS: [0, 1, 5, 6] })];
    const printable = fc.constantFrom(...'0123456789-+.eE ,X\0\x14\x15');
    const mutation = fc.record({
      at: fc.nat({ max: bases[0].length - 1 }),
      // Most mutations hit the header, where the numbers stand.
      inHeader: fc.nat({ max: 1279 }),
      hitHeader: fc.boolean(),
      text: fc.array(printable, { minLength: 1, maxLength: 8 }).map((c) => c.join('')),
    });
    let results = 0;
    let errors = 0;
    await fc.assert(
      fc.asyncProperty(
        fc.constantFrom(...bases),
        fc.array(mutation, { minLength: 1, maxLength: 6 }),
        fc.nat({ max: 60 }),
        async (base, mutations, cut) => {
          const bytes = base.slice(0, base.length - cut);
          for (const { at, inHeader, hitHeader, text } of mutations) {
            const place = hitHeader ? inHeader : at;
            for (let i = 0; i < text.length; i++)
              if (place + i < bytes.length) bytes[place + i] = text.charCodeAt(i);
          }
          if (await readAll(bytes)) errors++;
          else results++;
        },
      ),
      { numRuns: 600 },
    );
    // The mutations must exercise both ends.
    expect(results).toBeGreaterThan(50);
    expect(errors).toBeGreaterThan(50);
  });

  it('reads back what the writer wrote, values within half a step and annotations exactly', async () => {
    const signal = fc.record({
      samplesPerRecord: fc.integer({ min: 1, max: 20 }),
      physicalMin: fc.integer({ min: -9999, max: -1 }),
      physicalMax: fc.integer({ min: 1, max: 9999 }),
      phase: fc.double({ min: 0, max: 6, noNaN: true }),
    });
    const text = fc
      .string({ unit: 'grapheme', minLength: 1, maxLength: 12 })
      .filter(
        (value) => value.trim() === value && !['\0', '\x14', '\x15'].some((c) => value.includes(c)),
      );
    const annotation = fc.record({
      onsetS: fc.integer({ min: 0, max: 100_000 }).map((ms) => ms / 1000),
      durationS: fc.option(fc.integer({ min: 0, max: 5000 }).map((ms) => ms / 1000)),
      text,
    });
    await fc.assert(
      fc.asyncProperty(
        fc.array(signal, { minLength: 1, maxLength: 4 }),
        fc.integer({ min: 1, max: 5 }),
        fc.array(annotation, { maxLength: 6 }),
        async (signals, recordCount, annotations) => {
          const written = signals.map((s, i) => ({
            ...s,
            label: `S${i}`,
            unit: 'uV',
            samples: Float64Array.from(
              { length: s.samplesPerRecord * recordCount },
              (_, k) =>
                s.physicalMin + ((Math.sin(k + s.phase) + 1) / 2) * (s.physicalMax - s.physicalMin),
            ),
          }));
          const file = await openEdf(
            bytesOf(
              writeEdf({
                startedAt: '2020-01-01T00:00:00',
                recordDurationS: 2,
                signals: written,
                annotations,
              }),
            ),
          );
          for (const [i, s] of written.entries()) {
            const values = await file.readSamples(
              file.channels[i],
              file.segments[0],
              0,
              s.samples.length,
            );
            const halfStep = (s.physicalMax - s.physicalMin) / 65535 / 2;
            values.forEach((value, k) =>
              expect(Math.abs(value - s.samples[k])).toBeLessThanOrEqual(halfStep * 1.000001),
            );
          }
          const read = (await file.readAnnotations()).annotations;
          const byOnset = [...annotations].sort((a, b) => a.onsetS - b.onsetS);
          expect(read.map((a) => a.onsetS)).toEqual(byOnset.map((a) => a.onsetS));
          const key = (a: { onsetS: number; durationS: number | null; text: string }) =>
            `${a.onsetS}|${a.durationS}|${a.text}`;
          expect(read.map(key).sort()).toEqual(annotations.map(key).sort());
        },
      ),
      { numRuns: 100 },
    );
  });

  it('holds a stretch of records at a time, not the file, while it reads annotations', async () => {
    const samples = new Float32Array(3_000_000);
    const bytes = writeEdf({
      startedAt: '2020-01-01T00:00:00',
      recordDurationS: 1,
      signals: [
        {
          label: 'Cz',
          unit: 'uV',
          physicalMin: -1,
          physicalMax: 1,
          samplesPerRecord: 3000,
          samples,
        },
      ],
      annotations: [],
    });
    const source = countingSource(bytes);
    const file = await openEdf(source);
    await file.readAnnotations();
    expect(bytes.length).toBeGreaterThan(5_000_000);
    expect(source.largest).toBeLessThanOrEqual(4 * 1024 * 1024);
  });

  it('refuses more annotations than memory could pay for, without keeping them', async () => {
    const bytes = writeEdf({
      startedAt: '2020-01-01T00:00:00',
      recordDurationS: 1,
      signals: [],
      annotations: [{ onsetS: 0, text: 'a'.repeat(1_400_000) }],
    });
    const start = bytes.indexOf(0x61, 256 * 2);
    for (let i = start + 1; i < bytes.length - 2; i += 2) bytes[i] = 0x14;
    const file = await openEdf(bytesOf(bytes));
    await expect(file.readAnnotations()).rejects.toMatchObject({ code: 'too-many-annotations' });
  });
});
