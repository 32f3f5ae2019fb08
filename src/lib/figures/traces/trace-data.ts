import * as Comlink from 'comlink';
import { piecesIn } from '$workers/trace/pieces';
import type {
  ChannelArrays,
  TraceFile,
  TraceSource,
  TraceWorkerApi,
} from '$workers/trace/protocol';
import { pyramidLevels, type PyramidLevel } from '$workers/trace/pyramid';

const TILE_CACHE_BYTES = 48 * 1024 * 1024;
const TILES_IN_FLIGHT = 3;

/**
 * The traces' data on the page's side: owns the worker, and asks it for the envelopes of the whole
 * file (nearest to the window first) and for the samples in the window. `onChange` is called when
 * something new can be drawn.
 */
export class TraceData {
  readonly pyramids: (ChannelArrays | null)[];
  /** Levels by channel, and by piece length (the last piece of a segment may be shorter). */
  private readonly levels = new Map<number, PyramidLevel[][]>();
  private readonly tiles = new Map<number, ChannelArrays>();
  private readonly asked = new Set<number>();
  private wantedTiles: [number, number] = [0, 0];
  private focusS = 0;
  private tileBytes = 0;
  private isFilling = false;
  private isClosed = false;
  builtPieces = 0;
  failure: string | null = null;

  private constructor(
    private readonly worker: Worker,
    private readonly remote: Comlink.Remote<TraceWorkerApi>,
    readonly file: TraceFile,
    private readonly onChange: () => void,
  ) {
    this.pyramids = new Array<ChannelArrays | null>(file.pieces.length).fill(null);
  }

  static async open(source: TraceSource, onChange: () => void): Promise<TraceData> {
    const worker = new Worker(new URL('../../../../workers/trace-worker.ts', import.meta.url), {
      type: 'module',
      name: 'traces',
    });
    try {
      const remote = Comlink.wrap<TraceWorkerApi>(worker);
      const failed = new Promise<never>((_, reject) => {
        worker.addEventListener('error', () =>
          reject(new Error('The reader could not be started in this browser.')),
        );
      });
      const file = await Promise.race([remote.open(source), failed]);
      return new TraceData(worker, remote, file, onChange);
    } catch (error) {
      worker.terminate();
      throw error;
    }
  }

  close(): void {
    this.isClosed = true;
    this.worker.terminate();
  }

  /** Says which window is seen, and whether its samples are needed besides the envelopes. */
  look(startS: number, endS: number, needsSamples: boolean): void {
    this.focusS = (startS + endS) / 2;
    const [from, to] = piecesIn(this.file.tiles, startS, endS);
    // One tile beyond each end, so that scrolling finds it ready.
    this.wantedTiles = needsSamples
      ? [Math.max(0, from - 1), Math.min(this.file.tiles.length, to + 1)]
      : [0, 0];
    this.askTiles();
    void this.fill();
  }

  /** After a failure: everything that is missing is asked for again. */
  retry(): void {
    this.failure = null;
    this.askTiles();
    void this.fill();
  }

  tile(index: number): ChannelArrays | null {
    return this.tiles.get(index) ?? null;
  }

  /** The levels of one channel's pyramid in a piece. */
  levelsOf(piece: number, channel: number): PyramidLevel[] {
    const { recordCount } = this.file.pieces[piece];
    let all = this.levels.get(recordCount);
    if (!all) {
      all = this.file.channels.map(({ samplesPerRecord }) =>
        pyramidLevels(recordCount * samplesPerRecord, this.file.baseSamples),
      );
      this.levels.set(recordCount, all);
    }
    return all[channel];
  }

  private async fill(): Promise<void> {
    if (this.isFilling) return;
    this.isFilling = true;
    for (let piece = this.nextPiece(); piece >= 0 && !this.isStopped; piece = this.nextPiece()) {
      await this.attempt(async () => {
        this.pyramids[piece] = await this.remote.pyramid(piece);
        this.builtPieces++;
      });
    }
    this.isFilling = false;
  }

  private get isStopped(): boolean {
    return this.isClosed || this.failure !== null;
  }

  private nextPiece(): number {
    let best = -1;
    let bestDistance = Infinity;
    this.file.pieces.forEach((piece, i) => {
      if (this.pyramids[i]) return;
      const distance = Math.abs(piece.startS + piece.durationS / 2 - this.focusS);
      if (distance < bestDistance) {
        best = i;
        bestDistance = distance;
      }
    });
    return best;
  }

  private askTiles(): void {
    const [from, to] = this.wantedTiles;
    for (let tile = from; tile < to && this.asked.size < TILES_IN_FLIGHT; tile++) {
      if (this.isStopped || this.tiles.has(tile) || this.asked.has(tile)) continue;
      this.asked.add(tile);
      void this.attempt(async () => this.keepTile(tile, await this.remote.samples(tile))).then(
        () => {
          this.asked.delete(tile);
          this.askTiles();
        },
      );
    }
  }

  private keepTile(tile: number, arrays: ChannelArrays): void {
    const sizeOf = (list: ChannelArrays) => list.reduce((sum, array) => sum + array.byteLength, 0);
    this.tiles.set(tile, arrays);
    this.tileBytes += sizeOf(arrays);
    const [from, to] = this.wantedTiles;
    // A Map keeps the order of insertion: the oldest tiles outside the window go first.
    for (const [index, old] of this.tiles) {
      if (this.tileBytes <= TILE_CACHE_BYTES) break;
      if (index >= from && index < to) continue;
      this.tiles.delete(index);
      this.tileBytes -= sizeOf(old);
    }
  }

  private async attempt(read: () => Promise<void>): Promise<void> {
    try {
      await read();
    } catch (error) {
      this.failure = error instanceof Error ? error.message : String(error);
    }
    if (!this.isClosed) this.onChange();
  }
}
