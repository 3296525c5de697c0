/**
 * Numbers from 0 to 1 in an order fixed by the seed: the quick 32-bit congruential generator of Press and others,
 * Numerical Recipes, 2nd edition, section 7.1 (from memory).
 */
export function seededNumbers(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 2 ** 32;
  };
}

/** Spreads a number from 0 to 1 evenly over the decades between two positive bounds. */
export function overDecades(share: number, least: number, most: number): number {
  return least * (most / least) ** share;
}
