import { describe, expect, it } from 'vitest';
import { millerFarads } from '../../src/engine/tubes/miller.ts';

describe('Miller capacitance', () => {
  // https://www.htg2.net/index.php/topic,93294.msg604089060.html (seen): 12AX7 with 1.5 pF of strays, gain 56; page: 42.9 kΩ for 20 kHz.
  // 0.5 %: half of the last printed digit, with the page's own rounding
  it('12AX7 with strays, gain 56: 185.7 pF, 20 kHz from 42.85 kΩ', () => {
    const farads = millerFarads(1.8e-12 + 1.5e-12, 1.7e-12 + 1.5e-12, 56);
    expect(farads).toBeCloseTo(185.7e-12, 15);
    const kilohms = 1 / (2 * Math.PI * 20e3 * farads) / 1e3;
    expect(Math.abs(kilohms / 42.9 - 1)).toBeLessThan(0.005);
  });

  // https://ampbooks.com/mobile/tutorials/pentode-tutorial-3/ (seen): 5 pF + 101 × 0.05 pF, printed 10 pF and 159 kΩ for 100 kHz
  it('EF86, gain 100: 10 pF, 100 kHz from 159 kΩ', () => {
    const farads = millerFarads(5e-12, 0.05e-12, 100);
    expect(Math.abs(farads * 1e12 - 10)).toBeLessThanOrEqual(0.5);
    // 0.5 % of the exact 10.05 pF plus the page's rounding of it to 10 pF
    expect(Math.abs(1 / (2 * Math.PI * 100e3 * farads) / 159e3 - 1)).toBeLessThan(0.01);
  });

  // worked by hand: 1.6 + 1.7 × 58
  it('bare 12AX7, gain 57: 100.2 pF', () => {
    expect(millerFarads(1.6e-12, 1.7e-12, 57) * 1e12).toBeCloseTo(100.2, 9);
  });
});
