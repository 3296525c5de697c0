import { describe, expect, it } from 'vitest';
import { integratedLoudness, kSection } from '../../src/engine/measure/loudness.ts';

/** Gain of both K sections at a frequency, dB. */
function kGain(hertz: number, rate: number): number {
  const w = (2 * Math.PI * hertz) / rate;
  const size = (b0: number, b1: number, b2: number) =>
    Math.hypot(b0 + b1 * Math.cos(w) + b2 * Math.cos(2 * w), b1 * Math.sin(w) + b2 * Math.sin(2 * w));
  return (['shelf', 'high-pass'] as const).reduce((sum, stage) => {
    const [b0, b1, b2, a1, a2] = kSection(stage, rate);
    return sum + 20 * Math.log10(size(b0, b1, b2) / size(1, a1, a2));
  }, 0);
}

/** 1 kHz at levels in dBFS for seconds, one after the other, without a break in phase. */
function tone(hertz: number, rate: number, parts: readonly [number, number][]): Float64Array {
  const total = parts.reduce((sum, [, seconds]) => sum + Math.round(seconds * rate), 0);
  const samples = new Float64Array(total);
  let n = 0;
  for (const [level, seconds] of parts) {
    const peak = 10 ** (level / 20);
    for (let end = n + Math.round(seconds * rate); n < end; n++)
      samples[n] = peak * Math.sin((2 * Math.PI * hertz * n) / rate);
  }
  return samples;
}

describe('K weighting, ITU-R BS.1770-4', () => {
  it('is the printed table at 48 kHz', () => {
    // Annex 1, tables 1 and 2 (from memory). 1e-13: two passes through the bilinear transform in doubles
    const shelf = [1.53512485958697, -2.69169618940638, 1.19839281085285, -1.69065929318241, 0.73248077421585];
    const highPass = [1, -2, 1, -1.99004745483398, 0.99007225036621];
    kSection('shelf', 48000).forEach((value, k) => {
      expect(Math.abs(value - shelf[k]!)).toBeLessThan(1e-13);
    });
    kSection('high-pass', 48000).forEach((value, k) => {
      expect(Math.abs(value - highPass[k]!)).toBeLessThan(1e-13);
    });
  });

  // Worked by hand from the table; half of the last digit is 0.0005, 0.005 leaves room for the table's own digits at 20 Hz
  it.each([
    [20, -13.275],
    [31.5, -7.79],
    [63, -2.664],
    [100, -1.133],
    [200, -0.265],
    [400, -0.015],
    [500, 0.042],
    [997, 0.691],
    [1000, 0.698],
    [2000, 3.071],
    [4000, 3.968],
    [10000, 4.042],
  ])('%d Hz: %d dB', (hertz, decibels) => {
    expect(Math.abs(kGain(hertz, 48000) - decibels)).toBeLessThan(0.005);
  });

  // 0.05 dB: the bilinear transform bends each rate's treble in its own way; the prototype's own frequencies are held
  it.each([22050, 32000, 44100, 96000, 192000])('is the same curve at %d Hz up to 4 kHz', (rate) => {
    for (const hertz of [20, 63, 200, 997, 2000, 4000]) {
      expect(Math.abs(kGain(hertz, rate) - kGain(hertz, 48000))).toBeLessThan(0.05);
    }
  });
});

describe('loudness, the signals of EBU Tech 3341 (V4, 2023; cases seen in a public copy), ±0.1 LU as printed', () => {
  const cases: readonly [number, number, readonly [number, number][]][] = [
    [1, -23, [[-23, 20]]],
    [2, -33, [[-33, 20]]],
    [
      3,
      -23,
      [
        [-36, 10],
        [-23, 60],
        [-36, 10],
      ],
    ],
    [
      4,
      -23,
      [
        [-72, 10],
        [-36, 10],
        [-23, 60],
        [-36, 10],
        [-72, 10],
      ],
    ],
    [
      5,
      -23,
      [
        [-26, 20],
        [-20, 20.1],
        [-26, 20],
      ],
    ],
  ];
  it.each(cases)('case %d reads %d LUFS', (_, expected, parts) => {
    const side = tone(1000, 48000, parts);
    expect(Math.abs(integratedLoudness([side, side], 48000)! - expected)).toBeLessThan(0.1);
  });

  // ±0.1 LU as printed; 0.25 at 8 kHz, where the shelf at 1.68 kHz is bent by the nearness of half the rate
  it.each([
    [8000, 0.25],
    [11025, 0.1],
    [22050, 0.1],
    [44100, 0.1],
    [96000, 0.1],
  ])('case 1 at %d Hz reads -23 within %d LU', (rate, tolerance) => {
    const side = tone(1000, rate, [[-23, 20]]);
    const reading = integratedLoudness([side, side], rate)!;
    expect(Math.abs(reading + 23)).toBeLessThan(tolerance);
    // the reading at 48 kHz is -22.993; 0.03 is the bend of the weighting curve at 1 kHz at the rates clips usually have
    if (rate >= 22050) expect(Math.abs(reading + 22.993)).toBeLessThan(0.03);
  });

  it('reads full scale at 997 Hz in one channel as -3.01, as BS.1770 states', () => {
    // 0.005: half of the last digit
    expect(Math.abs(integratedLoudness([tone(997, 48000, [[0, 5]])], 48000)! + 3.01)).toBeLessThan(0.005);
    // worked by hand: the K gain of 400 Hz instead
    expect(Math.abs(integratedLoudness([tone(400, 48000, [[0, 5]])], 48000)! + 3.716)).toBeLessThan(0.005);
  });

  it('reads nothing from silence, from what lies below the gate, and from less than a block', () => {
    expect(integratedLoudness([new Float64Array(48000)], 48000)).toBeNull();
    expect(integratedLoudness([tone(1000, 48000, [[-75, 2]])], 48000)).toBeNull();
    expect(integratedLoudness([tone(1000, 48000, [[0, 0.3]])], 48000)).toBeNull();
    expect(integratedLoudness([], 48000)).toBeNull();
  });
});
