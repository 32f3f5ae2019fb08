import type { PairSampler, PermutationRange } from './model';

/** Values that one pair's surrogates may take at once, 64 MB of f32; more are made in tiles. */
const tileValues = 2 ** 24;

/** Turns what a sampler wrote into the statistic, in `first`. */
export type Combine = (first: Float32Array, second: Float32Array) => void;

/** Hears of surrogates `[permutation - range.from][feature]`. */
export type Visit = (first: Float32Array, second: Float32Array, range: PermutationRange) => void;

/**
 * One pair's surrogates for all permutations, gone through several times in order of permutation.
 * They are kept where they fit into one tile, and made again where they do not: memory grows
 * neither with the pairs nor, beyond a tile, with the permutations. Nothing that is computed from
 * them depends on the number of tiles.
 */
export class PairSurrogates {
  private readonly rowsPerTile: number;
  private readonly first: Float32Array;
  private readonly second: Float32Array;
  private held: 'nothing' | 'raw' | 'statistic' = 'nothing';
  private j = 0;
  private k = 0;

  constructor(
    private readonly sampler: PairSampler,
    private readonly size: { permutations: number; featureCount: number },
    private readonly combine: Combine | null,
    limit = tileValues,
  ) {
    const rows = Math.floor(limit / size.featureCount);
    this.rowsPerTile = Math.max(1, Math.min(size.permutations, rows));
    this.first = new Float32Array(this.rowsPerTile * size.featureCount);
    this.second = new Float32Array(combine ? this.first.length : 0);
  }

  begin(j: number, k: number): void {
    this.j = j;
    this.k = k;
    this.held = 'nothing';
  }

  /** Visits what the sampler makes: the measure of A and of B. */
  raw(visit: Visit): void {
    this.each('raw', visit);
  }

  /** Visits the statistic, in `first`. After it, `raw` may not be asked for the same pair. */
  statistic(visit: Visit): void {
    this.each('statistic', visit);
  }

  private each(wanted: 'raw' | 'statistic', visit: Visit): void {
    const { permutations, featureCount } = this.size;
    const single = this.rowsPerTile === permutations;
    for (let from = 0; from < permutations; from += this.rowsPerTile) {
      const range = { from, to: Math.min(permutations, from + this.rowsPerTile) };
      const values = (range.to - from) * featureCount;
      const first = this.first.subarray(0, values);
      const second = this.combine ? this.second.subarray(0, values) : this.second;
      if (this.held === 'nothing' || !single) {
        this.sampler.surrogates(this.j, this.k, range, first, second);
        this.held = 'raw';
      }
      if (wanted === 'statistic' && this.held === 'raw') {
        this.combine?.(first, second);
        this.held = 'statistic';
      }
      visit(first, second, range);
    }
  }
}
