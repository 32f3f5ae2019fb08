/** Seeded numbers in 0 .. 1; quick, and good enough for data. */
export function uniform(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(state ^ (state >>> 15), state | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32;
  };
}

/** A random order of 0 .. count - 1. */
export function order(count: number, random: () => number): Uint16Array {
  const items = Uint16Array.from({ length: count }, (_, i) => i);
  for (let i = count - 1; i > 0; i--) {
    const other = Math.floor(random() * (i + 1));
    [items[i], items[other]] = [items[other], items[i]];
  }
  return items;
}
