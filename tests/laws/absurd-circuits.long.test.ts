import { expect, it } from 'vitest';
import { workedOut } from './absurd-circuits.ts';

it('two thousand circuits far from anything built are worked out and heard, or refused in words, none without end', {
  timeout: 3_600_000,
}, () => {
  const tally = { answered: 0, refused: 0, unsettled: 0 };
  const wrong: string[] = [];
  for (let seed = 0; seed < 2000; seed++) {
    const outcome = workedOut(seed);
    if (outcome.refused === null) tally.answered++;
    else tally.refused++;
    if (outcome.unsettledSteps > 0) tally.unsettled++;
    if (outcome.wrong.length > 0) wrong.push(`${seed}: ${outcome.wrong[0]}; ${outcome.words}`);
    // seconds of this processor, not of the clock, which others share; all but a few crystals at 30 V take less than 5
    if (outcome.seconds > 25) wrong.push(`${seed}: ${outcome.seconds.toFixed(1)} s; ${outcome.words}`);
  }
  expect(wrong).toEqual([]);
  expect(tally.answered).toBeGreaterThan(1000);
  // few enough that their caution is rare
  expect(tally.unsettled).toBeLessThan(100);
});
