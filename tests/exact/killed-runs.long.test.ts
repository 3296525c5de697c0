import { expect, it } from 'vitest';
import { killedRuns } from './killed-runs.ts';

it('a render killed at a hundred moments leaves one whole set each time, clip and list untouched', {
  timeout: 600_000,
}, async () => {
  const { faults, killed, before, after, aside } = await killedRuns(100);
  expect(faults).toEqual([]);
  expect(before + after + aside).toBe(100);
  expect(killed).toBeGreaterThan(50);
});
