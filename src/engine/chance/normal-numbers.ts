import type { SeededNumbers } from './seeded-numbers.ts';

/**
 * Numbers of mean 0 and variance 1 with a Gaussian distribution, two at a time into `into`.
 *
 * Source: G. E. P. Box and M. E. Muller, A note on the generation of random normal deviates, Ann. Math. Statist. 29,
 * 1958 (from memory).
 */
export function normalPair(numbers: SeededNumbers, into: Float64Array): void {
  // 1 less a share is never 0
  const size = Math.sqrt(-2 * Math.log(1 - numbers.share()));
  const angle = 2 * Math.PI * numbers.share();
  into[0] = size * Math.cos(angle);
  into[1] = size * Math.sin(angle);
}

/** A waiting time, or another number with an exponential distribution, of mean 1. */
export function exponentialNumber(numbers: SeededNumbers): number {
  return -Math.log(1 - numbers.share());
}
