import { expect, it } from 'vitest';
import { type Outcome, workedOut } from './absurd-circuits.ts';

it('two dozen circuits far from anything built are worked out and heard, or refused in words', () => {
  const outcomes: Outcome[] = [];
  for (let seed = 5000; seed < 5024; seed++) outcomes.push(workedOut(seed, 0.15));
  expect(outcomes.filter(({ wrong }) => wrong.length > 0)).toEqual([]);
  // most are answered, else nothing is tried
  expect(outcomes.filter(({ refused }) => refused === null).length).toBeGreaterThan(12);
});
