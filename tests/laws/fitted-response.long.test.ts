import { describe, expect, it } from 'vitest';
import { fittedCases } from './fitted-cases.ts';
import { coil, stiff } from './grid-leak-circuit.ts';

// An interval of 95 % holds the true value in 95 of 100 cases on the average, in 90 to 99 of them with a chance of 97 %;
// Student's t for 26 degrees makes it 1.05 of the least width, chance and bends of the valley somewhat more.
describe('one hundred seeded measurements with 0.2 dB of noise, bypass and leak unknown', () => {
  it.each([
    ['a stiff source', stiff(30)],
    ['a coil that the detector loads', coil(90)],
  ] as const)('%s', (_, tunedCircuit) => {
    const { within, medianWidth } = fittedCases(7, 100, tunedCircuit);
    for (const count of within) {
      expect(count).toBeGreaterThanOrEqual(90);
      expect(count).toBeLessThanOrEqual(99);
    }
    for (const width of medianWidth) expect(width).toBeLessThan(1.3);
  });
});
