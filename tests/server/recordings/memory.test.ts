import { once } from 'node:events';
import { createWriteStream } from 'node:fs';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { ingestRecording } from '$lib/server/recordings';
import { writeEdf } from '../../../workers/engine/read';
import { openDatabase } from '../contrasts/fixture';
import { openLab } from './lab';

const db = openDatabase();
afterAll(() => db.destroy());

const signalCount = 64;
const samplesPerRecord = 512;

/** Writes an EDF+C file of about `sizeMb` by repeating one record with its own time stamp. */
async function writeLarge(path: string, sizeMb: number): Promise<void> {
  const samples = Float32Array.from({ length: samplesPerRecord }, (_, i) => Math.sin(i / 9) * 50);
  const signal = { unit: 'uV', physicalMin: -500, physicalMax: 500, samplesPerRecord, samples };
  const one = writeEdf({
    startedAt: '2024-03-05T10:20:30',
    recordDurationS: 1,
    signals: Array.from({ length: signalCount }, (_, i) => ({ ...signal, label: `E${i + 1}` })),
    annotations: [],
  });
  const headerBytes = 256 * (signalCount + 2);
  const record = Buffer.from(one.subarray(headerBytes));
  const recordCount = Math.ceil((sizeMb * 1e6) / record.length);
  const header = Buffer.from(one.subarray(0, headerBytes));
  header.write(String(recordCount).padEnd(8), 236, 'latin1');
  const file = createWriteStream(path);
  file.write(header);
  for (let i = 0; i < recordCount; i++) {
    const own = Buffer.from(record);
    own.fill(0, signalCount * samplesPerRecord * 2);
    own.write(`+${i}\x14\x14\0`, signalCount * samplesPerRecord * 2, 'latin1');
    if (!file.write(own)) await once(file, 'drain');
  }
  file.end();
  await once(file, 'finish');
}

describe('taking a large recording in', () => {
  // 150 MB here; INGEST_MEMORY_MB asks for more. The bound is far below the file's size and
  // covers buffers of both ends of the copy, what the collector has not yet freed, and the
  // reader's chunks of 4 MB.
  it('needs a small part of its size in memory', async () => {
    const sizeMb = Number(process.env['INGEST_MEMORY_MB'] ?? 150);
    const boundMb = 64;
    const lab = await openLab(db);
    const path = join(lab.folder, 'large.edf');
    await writeLarge(path, sizeMb);
    const before = process.memoryUsage().rss;
    let peak = before;
    const watch = setInterval(() => {
      peak = Math.max(peak, process.memoryUsage().rss);
    }, 5);
    const ingested = await ingestRecording(db, lab.storage, lab.member, {
      studyId: lab.studyId,
      participantCode: 'P01',
      name: 'large.edf',
      path,
      keepIdentification: false,
    });
    clearInterval(watch);
    const grownMb = (peak - before) / 1e6;
    console.info(`ingest of ${sizeMb} MB: resident memory grew by ${grownMb.toFixed(0)} MB`);
    expect(ingested.kind).toBe('stored');
    expect(grownMb).toBeLessThan(boundMb);
    await lab.close();
  });
});
