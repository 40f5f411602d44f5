/** A source of uniform numbers in [0, 1). */
export type Random = () => number;

/**
 * Seeded uniform generator: the same seed gives the same stream on every machine.
 * Algorithm: splitmix32, a 32-bit finaliser over a Weyl sequence (Steele, Lea & Flood 2014; 32-bit form from memory).
 */
export function seededRandom(seed: number): Random {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x9e3779b9) >>> 0;
    let mixed = state ^ (state >>> 16);
    mixed = Math.imul(mixed, 0x21f0aaad);
    mixed ^= mixed >>> 15;
    mixed = Math.imul(mixed, 0x735a2d97);
    mixed ^= mixed >>> 15;
    return (mixed >>> 0) / 4294967296;
  };
}

/** Whole number in [0, count). */
export function randomIndex(random: Random, count: number): number {
  return Math.min(count - 1, Math.floor(random() * count));
}

/** Standard normal deviate by the polar method (Marsaglia & Bray 1964). */
export function randomNormal(random: Random): number {
  for (;;) {
    const u = 2 * random() - 1;
    const v = 2 * random() - 1;
    const q = u * u + v * v;
    if (q > 0 && q < 1) return u * Math.sqrt((-2 * Math.log(q)) / q);
  }
}

/** New array in random order (Durstenfeld's form of the Fisher–Yates shuffle). */
export function shuffled<T>(items: readonly T[], random: Random): T[] {
  const out = [...items];
  for (let i = out.length - 1; i > 0; i--) {
    const j = randomIndex(random, i + 1);
    [out[i], out[j]] = [out[j]!, out[i]!];
  }
  return out;
}
