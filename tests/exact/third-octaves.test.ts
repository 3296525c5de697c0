import { describe, expect, it } from 'vitest';
import { THIRD_OCTAVE_EXACT_HERTZ, THIRD_OCTAVE_NOMINAL_HERTZ } from '../../src/engine/parts/third-octaves.ts';

describe('third-octave frequencies, ISO 266', () => {
  // http://blog.prosig.com/2006/02/17/standard-octave-bands/trackback/ (seen)
  it('has the printed nominal frequencies from 25 Hz to 16 kHz', () => {
    expect(THIRD_OCTAVE_NOMINAL_HERTZ.join(' ')).toBe(
      '25 31.5 40 50 63 80 100 125 160 200 250 315 400 500 630 800 1000 1250 1600 2000 2500 3150 4000 5000 6300 8000 10000 12500 16000',
    );
  });

  it('has the exact frequencies of base ten behind them', () => {
    expect(THIRD_OCTAVE_EXACT_HERTZ).toHaveLength(29);
    expect(THIRD_OCTAVE_EXACT_HERTZ[16]).toBe(1000);
    // the same page prints 794.3282 for the base-ten 800 Hz
    expect(THIRD_OCTAVE_EXACT_HERTZ[15]!.toFixed(4)).toBe('794.3282');
    expect(THIRD_OCTAVE_EXACT_HERTZ[26]).toBeCloseTo(10000, 9);
  });

  it('keeps every label within 0.95 % of its exact frequency, 16 kHz among the worst', () => {
    const gaps = THIRD_OCTAVE_NOMINAL_HERTZ.map((label, i) => Math.abs(label / THIRD_OCTAVE_EXACT_HERTZ[i]! - 1));
    // 0.95 % is the largest gap worked by hand, to its last digit
    expect(Math.max(...gaps)).toBeLessThan(0.00955);
    expect(gaps[28]).toBeCloseTo(Math.max(...gaps), 12);
  });
});
