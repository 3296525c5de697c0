import { guessProbability, leastConvincing } from '../engine/measure/blind-test.ts';

/** The result of a blind test in words. */
export interface BlindWords {
  /** `12 of 16 right`. */
  readonly score: string;
  /** The probability of doing as well by guessing, with enough digits to be checked. */
  readonly probability: string;
  readonly meaning: string;
}

/** What so many right answers mean. */
export function blindWords(correct: number, trials: number): BlindWords {
  const probability = guessProbability(correct, trials);
  const least = leastConvincing(trials);
  const convincing = least !== null && correct >= least;
  const meaning = convincing
    ? `Guessing does as well in ${oneIn(probability)}: you most likely heard a difference.`
    : `Guessing does as well in ${oneIn(probability)}: this is no sign that you heard a difference${least === null ? '' : `; it would take ${least} of ${trials}`}. It does not show that there is none.`;
  return { score: `${correct} of ${trials} right`, probability: probability.toFixed(6), meaning };
}

function oneIn(probability: number): string {
  if (probability > 0.5) return `${Math.round(100 * probability)} of 100 tests`;
  return `one of ${Math.round(1 / probability)} tests`;
}
