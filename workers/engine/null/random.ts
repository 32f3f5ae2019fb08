import seedrandom from 'seedrandom';

/** A seeded source of unbiased whole numbers. */
export interface RandomIntegers {
  /** Uniform in 0 .. limit - 1; limit from 1 to 2^32. */
  below(limit: number): number;
}

const wordCount = 2 ** 32;

/**
 * The generator of permutation p: seeded by the text `seed/nullId/p` alone, so a permutation does
 * not depend on which others are drawn, where, or in which order (numerics, section 4).
 */
export function permutationGenerator(
  seed: string,
  nullId: string,
  permutation: number,
): RandomIntegers {
  const generator = seedrandom(`${seed}/${nullId}/${permutation}`);
  return {
    below(limit) {
      // Words in the last, incomplete stretch of `limit` are drawn again: no modulo bias.
      const bound = wordCount - (wordCount % limit);
      let word = generator.int32() >>> 0;
      while (word >= bound) word = generator.int32() >>> 0;
      return word % limit;
    },
  };
}

/** Fisher-Yates: every order of `items[from .. to)` is equally likely. Mutates `items`. */
export function shuffle(
  items: Uint16Array | Uint32Array,
  from: number,
  to: number,
  random: RandomIntegers,
): void {
  for (let i = to - 1; i > from; i--) {
    const other = from + random.below(i - from + 1);
    const kept = items[i];
    items[i] = items[other];
    items[other] = kept;
  }
}
