import { describe, expect, it } from 'vitest';
import { harmonics, totalHarmonicDistortion } from '../../src/engine/measure/harmonics.ts';
import { binAmplitudes, realSpectrum } from '../../src/engine/measure/spectrum.ts';

function wave(n: number, f: (t: number) => number): Float64Array {
  return Float64Array.from({ length: n }, (_, k) => f(k / n));
}

describe('harmonics', () => {
  it('gives amplitude and phase of each harmonic, and the mean with its sign', () => {
    const samples = wave(
      960,
      (t) => -0.3 + 2 * Math.cos(2 * Math.PI * 5 * t + 0.7) + 0.04 * Math.cos(2 * Math.PI * 15 * t - 2),
    );
    const { amplitudes, phases } = harmonics(samples, 5, 4);
    // 1e-13: a sum of 960 rounded terms
    expect(Math.abs(amplitudes[0]! + 0.3)).toBeLessThan(1e-13);
    expect(Math.abs(amplitudes[1]! - 2)).toBeLessThan(1e-13);
    expect(Math.abs(phases[1]! - 0.7)).toBeLessThan(1e-13);
    expect(amplitudes[2]!).toBeLessThan(1e-13);
    expect(Math.abs(amplitudes[3]! - 0.04)).toBeLessThan(1e-13);
    // 1e-11: the same rounding over an amplitude of 0.04
    expect(Math.abs(phases[3]! + 2)).toBeLessThan(1e-11);
  });

  it('leaves out what the sample rate cannot carry', () => {
    expect(
      harmonics(
        wave(16, (t) => Math.cos(2 * Math.PI * 3 * t)),
        3,
        4,
      ).amplitudes[3],
    ).toBe(0);
  });

  it.each([0, 1.5, -1, 8, Number.NaN])('refuses %d cycles in 16 samples', (cycles) => {
    expect(() => harmonics(new Float64Array(16), cycles, 3)).toThrow(RangeError);
  });

  // Referred to the fundamental, all harmonics: Fourier series worked by hand (square √(π²/8 - 1), triangle √(π⁴/96 - 1), sawtooth
  // √(π²/6 - 1)). 0.05 % absolute: the series is cut at harmonic 4000 and the wave is sampled at 2¹⁵ points
  it.each([
    ['square', (t: number) => (t < 0.5 ? 1 : -1), 0.48343],
    ['triangle', (t: number) => Math.abs(2 * t - 1), 0.12115],
    ['sawtooth', (t: number) => t, 0.80307],
  ])('reads a %s wave', (_, f, fraction) => {
    const { amplitudes } = harmonics(wave(32768, f), 1, 4000);
    expect(Math.abs(totalHarmonicDistortion(amplitudes, 2, 4000)! - fraction)).toBeLessThan(0.0005);
  });

  it('counts harmonics 2 to 10 unless told otherwise, and nothing without a fundamental', () => {
    const amplitudes = Float64Array.from({ length: 14 }, (_, h) =>
      h === 1 ? 1 : h === 11 ? 5 : h === 2 ? 0.03 : h === 3 ? 0.04 : 0,
    );
    expect(totalHarmonicDistortion(amplitudes)).toBeCloseTo(0.05, 15);
    expect(totalHarmonicDistortion(new Float64Array(11))).toBeNull();
  });
});

describe('spectrum', () => {
  it.each([2, 4, 8, 64])('is the sum it says it is, for %d samples', (n) => {
    const samples = Float64Array.from({ length: n }, (_, k) => Math.sin(1.3 * k * k + 0.2));
    const { real, imaginary } = realSpectrum(samples);
    expect(real).toHaveLength(n / 2 + 1);
    for (let bin = 0; bin <= n / 2; bin++) {
      let re = 0;
      let im = 0;
      samples.forEach((x, k) => {
        re += x * Math.cos((2 * Math.PI * bin * k) / n);
        im -= x * Math.sin((2 * Math.PI * bin * k) / n);
      });
      // 1e-12: a sum of 64 terms
      expect(Math.abs(real[bin]! - re)).toBeLessThan(1e-12);
      expect(Math.abs(imaginary[bin]! - im)).toBeLessThan(1e-12);
    }
  });

  it('reads peak amplitudes, agreeing with the projections', () => {
    const samples = wave(
      1024,
      (t) =>
        0.5 +
        0.7 * Math.cos(2 * Math.PI * 8 * t) +
        0.02 * Math.sin(2 * Math.PI * 24 * t) +
        0.1 * Math.cos(2 * Math.PI * 512 * t),
    );
    const bins = binAmplitudes(samples);
    const { amplitudes } = harmonics(samples, 8, 3);
    // 1e-14: two sums of 1024 terms in another order
    for (const h of [0, 1, 2, 3]) expect(Math.abs(bins[8 * h]! - amplitudes[h]!)).toBeLessThan(1e-14);
    expect(Math.abs(bins[512]! - 0.1)).toBeLessThan(1e-14);
  });

  it.each([0, 1, 3, 1000])('refuses %d samples', (n) => {
    expect(() => realSpectrum(new Float64Array(n))).toThrow(RangeError);
  });
});
