import * as Comlink from 'comlink';
import { bytesOfBlob, type EdfFile, type EdfSignal, openEdf } from './engine/read';
import { cutPieces, type Piece } from './trace/pieces';
import type { ChannelArrays, TraceFile, TraceSource, TraceWorkerApi } from './trace/protocol';
import { chooseBase, fillPyramid, pyramidLength, pyramidLevels } from './trace/pyramid';
import { bytesOfUrl } from './trace/url-source';

/** Reads a recording for the traces: envelopes of long stretches, samples of short ones. */

const PIECE_BYTES = 4 * 1024 * 1024;
const TILE_BYTES = 512 * 1024;
const PYRAMID_BYTES = 96 * 1024 * 1024;

let file: EdfFile | null = null;
let traceFile: TraceFile | null = null;

async function open(source: TraceSource): Promise<TraceFile> {
  const bytes = 'blob' in source ? bytesOfBlob(source.blob) : bytesOfUrl(source.url, source.size);
  file = await openEdf(bytes);
  const { segments, recordDurationS } = file;
  const recordBytes = file.signals.reduce((sum, signal) => sum + signal.samplesPerRecord * 2, 0);
  const recordsIn = (limit: number) => Math.max(1, Math.floor(limit / recordBytes));
  traceFile = {
    channels: file.channels.map((signal) => ({
      label: signal.label,
      unit: signal.unit,
      samplingRateHz: signal.samplingRateHz,
      samplesPerRecord: signal.samplesPerRecord,
      perStep: signal.scale?.perStep ?? null,
    })),
    segments: segments.map(({ startS, durationS }) => ({ startS, durationS })),
    pieces: cutPieces(segments, recordDurationS, recordsIn(PIECE_BYTES)),
    tiles: cutPieces(segments, recordDurationS, recordsIn(TILE_BYTES)),
    baseSamples: chooseBase(recordBytes * file.recordCount, PYRAMID_BYTES),
  };
  return traceFile;
}

function opened(): { file: EdfFile; traceFile: TraceFile } {
  if (!file || !traceFile) throw new Error('The recording is not open yet.');
  return { file, traceFile };
}

/** The samples of each channel in a piece, gathered from the records that hold them in turn. */
async function samplesOf(edf: EdfFile, piece: Piece): Promise<ChannelArrays> {
  const records = await edf.readRecords(piece.firstRecord, piece.recordCount);
  const width = records.length / piece.recordCount;
  return edf.channels.map((channel: EdfSignal) => {
    const { samplesPerRecord, firstInRecord } = channel;
    const samples = new Int16Array(piece.recordCount * samplesPerRecord);
    for (let r = 0; r < piece.recordCount; r++) {
      const at = r * width + firstInRecord;
      samples.set(records.subarray(at, at + samplesPerRecord), r * samplesPerRecord);
    }
    return samples;
  });
}

function transferred(arrays: ChannelArrays): ChannelArrays {
  return Comlink.transfer(
    arrays,
    arrays.map((array) => array.buffer as ArrayBuffer),
  );
}

const api: TraceWorkerApi = {
  open,
  async pyramid(index) {
    const { file: edf, traceFile: known } = opened();
    const channels = await samplesOf(edf, known.pieces[index]);
    return transferred(
      channels.map((samples) => {
        const levels = pyramidLevels(samples.length, known.baseSamples);
        const out = new Int16Array(pyramidLength(levels));
        fillPyramid(samples, levels, out);
        return out;
      }),
    );
  },
  async samples(index) {
    const { file: edf, traceFile: known } = opened();
    return transferred(await samplesOf(edf, known.tiles[index]));
  },
};

Comlink.expose(api);
