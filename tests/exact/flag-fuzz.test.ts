import { expect, it } from 'vitest';
import { slippedFlags } from './flag-slips.ts';

it('flags of all kinds end with a status of the command’s own and no number that is none', async () => {
  const seen = await slippedFlags(120, 51);
  // refusals, answers: both must occur, else nothing is tried
  expect(seen[2]).toBeGreaterThan(20);
  expect(seen[0]).toBeGreaterThan(5);
});
