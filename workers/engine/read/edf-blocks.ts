import type { ByteSource } from './byte-source';
import type { EdfHeader } from './edf-header';

/** Called for each block of each annotations signal, in the file's order; false ends the walk. */
export type BlockVisitor = (
  block: Uint8Array,
  place: { record: number; signal: number; offset: number },
) => boolean;

const CHUNK_BYTES = 4 * 1024 * 1024;
const PARALLEL_READS = 32;

/**
 * Walks the annotation blocks of records `0..recordCount)`. Reads whole stretches of small
 * records, and only the blocks' span of large ones, so that no more than CHUNK_BYTES (or one
 * record's span) is held at a time.
 */
export async function walkBlocks(
  source: ByteSource,
  header: EdfHeader,
  visit: BlockVisitor,
): Promise<void> {
  const blocks = header.signals
    .filter((signal) => signal.isAnnotation)
    .map((signal) => ({ at: signal.firstInRecord * 2, bytes: signal.samplesPerRecord * 2 }));
  if (blocks.length === 0) return;
  const spanStart = blocks[0].at;
  const last = blocks[blocks.length - 1];
  const spanBytes = last.at + last.bytes - spanStart;
  const { recordBytes, headerBytes, recordCount } = header;
  const offsetOf = (record: number) => headerBytes + record * recordBytes;

  const visitRecord = (span: Uint8Array, record: number): boolean =>
    blocks.every((block, signal) => {
      const from = block.at - spanStart;
      const offset = offsetOf(record) + block.at;
      return visit(span.subarray(from, from + block.bytes), { record, signal, offset });
    });

  const sparse =
    recordBytes > CHUNK_BYTES || (recordBytes >= 16384 && spanBytes * 16 < recordBytes);
  const perRead = sparse
    ? Math.max(1, Math.min(PARALLEL_READS, Math.floor(CHUNK_BYTES / spanBytes)))
    : Math.max(1, Math.floor(CHUNK_BYTES / recordBytes));
  for (let first = 0; first < recordCount; first += perRead) {
    const count = Math.min(perRead, recordCount - first);
    const spans = sparse
      ? await Promise.all(
          Array.from({ length: count }, (_, i) =>
            source.read(offsetOf(first + i) + spanStart, spanBytes),
          ),
        )
      : slicesOf(await source.read(offsetOf(first), count * recordBytes), count, spanStart);
    for (let i = 0; i < count; i++) if (!visitRecord(spans[i], first + i)) return;
  }
}

function slicesOf(bytes: Uint8Array, count: number, spanStart: number): Uint8Array[] {
  const recordBytes = bytes.length / count;
  return Array.from({ length: count }, (_, i) =>
    bytes.subarray(i * recordBytes + spanStart, (i + 1) * recordBytes),
  );
}
