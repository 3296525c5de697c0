import { describe, expect, it } from 'vitest';
import type { FiniteFilter } from '../../src/engine/station/finite-filter.ts';
import {
  bandLimitFilter,
  preEmphasise,
  preEmphasisFilter,
  preEmphasisMagnitude,
} from '../../src/engine/station/pre-emphasis.ts';

const RATES = [8000, 11025, 16000, 22050, 32000, 44100, 48000, 96000, 192000];

function gain({ taps }: FiniteFilter, hertz: number, rate: number): number {
  let real = 0;
  let imaginary = 0;
  taps.forEach((tap, k) => {
    real += tap * Math.cos((2 * Math.PI * hertz * k) / rate);
    imaginary -= tap * Math.sin((2 * Math.PI * hertz * k) / rate);
  });
  return 20 * Math.log10(Math.hypot(real, imaginary));
}

describe('NRSC-1 pre-emphasis, modified 75 µs (zero 2122 Hz, pole 8700 Hz, from memory)', () => {
  // Worked by hand from the formula. 0.006: half of the last printed digit
  it.each([
    [100, 0.01],
    [400, 0.14],
    [1000, 0.81],
    [2000, 2.54],
    [3000, 4.28],
    [4000, 5.75],
    [5000, 6.92],
    [6000, 7.85],
    [7000, 8.58],
    [8000, 9.16],
    [9000, 9.62],
    [10000, 10],
  ])('%d Hz: %d dB', (hertz, decibels) => {
    expect(Math.abs(20 * Math.log10(preEmphasisMagnitude(hertz)) - decibels)).toBeLessThan(0.006);
  });

  // 0.05 dB: the tolerance on the curve; a listener hears 0.5 dB at best
  it.each(RATES)('is met by the filter at %d Hz to 10 kHz or 0.45 of the rate', (rate) => {
    const filter = preEmphasisFilter(rate);
    for (let hertz = 20; hertz <= Math.min(10000, 0.45 * rate); hertz *= 1.05) {
      expect(Math.abs(gain(filter, hertz, rate) - 20 * Math.log10(preEmphasisMagnitude(hertz)))).toBeLessThan(0.05);
    }
  });
});

describe('NRSC-1 audio stop band', () => {
  // -15 dB at 10 kHz, -30 at 10.5, -40 at 11, -50 at 15: https://www.radiobanter.com/201096-post44.html (a broadcast engineer, seen);
  // straight lines in between (from memory). The standard itself was not seen.
  const mask: readonly [number, number][] = [
    [10000, -15],
    [10500, -30],
    [11000, -40],
    [15000, -50],
  ];
  function allowed(hertz: number): number {
    for (let i = 1; i < mask.length; i++) {
      const [f0, d0] = mask[i - 1]!;
      const [f1, d1] = mask[i]!;
      if (hertz <= f1) return d0 + ((d1 - d0) * (hertz - f0)) / (f1 - f0);
    }
    return -50;
  }

  it.each(RATES.filter((rate) => rate >= 22050))(
    'is kept at %d Hz, and the band below 9.5 kHz flat to 0.1 dB',
    (rate) => {
      const filter = bandLimitFilter('nrsc-1', 'none', rate)!;
      for (let hertz = 10000; hertz < rate / 2; hertz += 37)
        expect(gain(filter, hertz, rate)).toBeLessThan(allowed(hertz));
      // 0.1 dB is the promise of the filter, a fifth of what can be heard
      for (let hertz = 20; hertz <= 9500; hertz += 93) expect(Math.abs(gain(filter, hertz, rate))).toBeLessThan(0.1);
    },
  );

  it('needs no filter where the clip ends below it', () => {
    expect(bandLimitFilter('nrsc-1', 'none', 16000)).toBeNull();
    expect(bandLimitFilter('none', 'none', 48000)).toBeNull();
    expect(bandLimitFilter('none', 'channel 9 kHz', 8000)).toBeNull();
  });

  // our own limit, no standard: half a 9 kHz channel
  it.each(RATES.filter((rate) => rate >= 11025))(
    'the channel limit at %d Hz is 6 dB down at 4.5 kHz, flat to 4.2 and 50 dB down from 4.8',
    (rate) => {
      const filter = bandLimitFilter('nrsc-1', 'channel 9 kHz', rate)!;
      // 0.1 dB: half amplitude at the middle of the edge, by symmetry of the window, to its ripple
      expect(Math.abs(gain(filter, 4500, rate) + 6.02)).toBeLessThan(0.1);
      for (let hertz = 20; hertz <= 4200; hertz += 93) expect(Math.abs(gain(filter, hertz, rate))).toBeLessThan(0.1);
      for (let hertz = 4800; hertz < rate / 2; hertz += 37) expect(gain(filter, hertz, rate)).toBeLessThan(-50);
    },
  );
});

describe('pre-emphasis of a clip', () => {
  const rate = 48000;
  const burst = Float64Array.from(
    { length: 6000 },
    (_, n) => Math.sin((2 * Math.PI * 200 * n) / rate) * Math.exp(-(((n - 3000) / 900) ** 2)),
  );

  it('keeps length and input, and without any choice the samples', () => {
    const before = Float64Array.from(burst);
    const same = preEmphasise(burst, rate, 'none', 'none');
    expect(same).toEqual(burst);
    expect(same).toBe(burst);
    expect(preEmphasise(burst, rate, 'nrsc-1', 'channel 9 kHz')).toHaveLength(burst.length);
    expect(burst).toEqual(before);
  });

  it('leaves a 200 Hz burst where it is', () => {
    for (const limit of ['none', 'channel 9 kHz'] as const) {
      const limited = preEmphasise(burst, rate, 'none', limit);
      // 2e-3: ripple of the limit, 56 dB
      for (let n = 0; n < burst.length; n += 7) expect(Math.abs(limited[n]! - burst[n]!)).toBeLessThan(2e-3);
    }
    // 0.1: the network's own lead at 200 Hz is 75 - 18 µs, 0.07 rad, and its gain there 0.03 dB; a delay of the 10 kHz filter left in
    // (some 140 samples) would be 3.7 rad
    const emphasised = preEmphasise(burst, rate, 'nrsc-1', 'none');
    for (let n = 0; n < burst.length; n += 7) expect(Math.abs(emphasised[n]! - burst[n]!)).toBeLessThan(0.1);
  });

  it('works on clips shorter than the filter, and on none', () => {
    expect(preEmphasise(Float64Array.of(1, 0, 0), rate, 'nrsc-1', 'none').every(Number.isFinite)).toBe(true);
    expect(preEmphasise(new Float64Array(0), rate, 'nrsc-1', 'channel 9 kHz')).toHaveLength(0);
  });

  it('refuses a rate it was not made for', () => {
    for (const bad of [4000, 400000, Number.NaN])
      expect(() => preEmphasise(burst, bad, 'nrsc-1', 'none')).toThrow('rate-out-of-range');
  });
});
