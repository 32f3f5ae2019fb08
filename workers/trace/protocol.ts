import type { Piece } from './pieces';

export type TraceSource = { url: string; size: number } | { blob: Blob };

/** What a page must know to draw; values of `pieces` and `tiles` are asked for one by one. */
export interface TraceFile {
  channels: TraceSignal[];
  segments: { startS: number; durationS: number }[];
  /** Long stretches, each with a pyramid. */
  pieces: Piece[];
  /** Short stretches whose samples are asked for as they are. */
  tiles: Piece[];
  baseSamples: number;
}

export interface TraceSignal {
  label: string;
  unit: string;
  samplingRateHz: number;
  samplesPerRecord: number;
  /** Units in one digital step; null where the file gives no usable scale. */
  perStep: number | null;
}

/** One Int16Array a channel: pyramids of a piece, or samples of a tile. */
export type ChannelArrays = Int16Array[];

export interface TraceWorkerApi {
  /** Opens the file; one file a worker. Rejects with a message for people. */
  open(source: TraceSource): Promise<TraceFile>;
  /** The pyramids of one piece; buffers are transferred. */
  pyramid(piece: number): Promise<ChannelArrays>;
  /** The samples of one tile; buffers are transferred. */
  samples(tile: number): Promise<ChannelArrays>;
}
