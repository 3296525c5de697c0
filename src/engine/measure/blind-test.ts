/** Which of the two variants a trial hides. */
export type Hidden = 'first' | 'second';

/** Fewest and most trials of a test: below, no result can mean anything; above, ears tire. Common practice, no source. */
export const TRIAL_RANGE = { least: 5, most: 50 } as const;

/** Probability below which a result counts as more than luck: the usual one in twenty. Common practice, no source. */
export const LUCK_LIMIT = 0.05;

/**
 * What each trial hides: every one drawn on its own with equal chance, so that neither the past nor a balance between the
 * two helps a guess.
 *
 * @param trials  how many, 0 and up
 * @param random  gives numbers evenly spread over 0 to 1, 1 not included
 */
export function hiddenSequence(trials: number, random: () => number): Hidden[] {
  return Array.from({ length: trials }, () => (random() < 0.5 ? 'first' : 'second'));
}

/** How many answers named what was hidden. */
export function countCorrect(hidden: readonly Hidden[], answers: readonly Hidden[]): number {
  return answers.reduce((count, answer, n) => count + (answer === hidden[n] ? 1 : 0), 0);
}

/**
 * Probability of at least `correct` right answers in `trials` by guessing: P(X >= correct | trials, 1/2), exact but for
 * rounding in the last digits. 1 for nothing right, 0 for more right than there were trials.
 *
 * Derived here: the sum of binomial coefficients over 2^n, each coefficient from the one before; whole numbers below
 * 2^53 up to 50 trials, so that every coefficient is exact.
 */
export function guessProbability(correct: number, trials: number): number {
  let coefficient = 1;
  let sum = 0;
  for (let k = trials; k >= Math.max(correct, 0); k--) {
    sum += coefficient;
    coefficient = (coefficient * k) / (trials - k + 1);
  }
  return sum / 2 ** trials;
}

/** Fewest right answers in `trials` that guessing reaches less often than `limit`; null when not even all would do. */
export function leastConvincing(trials: number, limit: number = LUCK_LIMIT): number | null {
  for (let correct = 0; correct <= trials; correct++) if (guessProbability(correct, trials) < limit) return correct;
  return null;
}
