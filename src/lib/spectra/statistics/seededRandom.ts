/** Uniform numbers in [0, 1) that follow from the seed alone. */
export type RandomSource = () => number;

/**
 * A small seeded generator for permutation checks and trial data: a counter stepped by 2^32 over the golden
 * ratio, through the 32-bit finaliser of MurmurHash3. Integer arithmetic only, so the same seed gives the same
 * numbers everywhere. Not for secrets.
 */
export function seededRandom(seed: number): RandomSource {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x9e3779b9) >>> 0;
    let z = state;
    z = Math.imul(z ^ (z >>> 16), 0x85ebca6b);
    z = Math.imul(z ^ (z >>> 13), 0xc2b2ae35);
    z ^= z >>> 16;
    return (z >>> 0) / 4294967296;
  };
}

/** A shuffled copy (Fisher & Yates). */
export function shuffled<T>(items: readonly T[], random: RandomSource): T[] {
  const copy = [...items];
  for (let i = copy.length - 1; i > 0; i--) {
    const j = Math.floor(random() * (i + 1));
    [copy[i], copy[j]] = [copy[j], copy[i]];
  }
  return copy;
}
