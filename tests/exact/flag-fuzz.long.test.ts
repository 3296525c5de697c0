import { expect, it } from 'vitest';
import { slippedFlags } from './flag-slips.ts';

it('3,000 runs with flags of all kinds end with a status of the command’s own', { timeout: 1_800_000 }, async () => {
  const seen = await slippedFlags(3000, 52);
  expect(seen[2]).toBeGreaterThan(500);
  expect(seen[0]).toBeGreaterThan(100);
});
