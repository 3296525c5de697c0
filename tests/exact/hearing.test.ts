import FFT from 'fft.js';
import { describe, expect, it } from 'vitest';
import { curveDecibels, HEARING_CURVES, type HearingCurve } from '../../src/engine/hearing/hearing-curves.ts';
import { heardThrough } from '../../src/engine/hearing/hearing-filter.ts';

const RATES_HERTZ = [8000, 44_100, 48_000, 96_000];

/** Our own measured-looking earpiece: steep below, a peak, a fall; straight lines over log frequency between. */
const OWN: HearingCurve = {
  name: 'own points',
  sections: [],
  points: [
    { hertz: 100, decibels: -20 },
    { hertz: 300, decibels: 0 },
    { hertz: 1000, decibels: 3 },
    { hertz: 3000, decibels: 10 },
    { hertz: 6000, decibels: -12 },
    { hertz: 10_000, decibels: -40 },
  ],
  source: 'our own',
};
const CURVES = [...HEARING_CURVES.filter(({ name }) => name !== 'flat'), OWN];

/** What comes of a click of one: the filter itself, a quarter of a second of it and more. */
function click(curve: HearingCurve, rateHertz: number): Float64Array {
  const samples = new Float64Array(2 ** Math.ceil(Math.log2(rateHertz / 3)));
  samples[0] = 1;
  return heardThrough(samples, curve, rateHertz);
}

interface Line {
  readonly hertz: number;
  readonly decibels: number;
  /** Phase turned since 0 Hz, half turns. */
  readonly halfTurns: number;
}

/** Spectrum from 0 to half the rate, on four times the click's lines so that no turn of phase goes unseen. */
function spectrum(response: Float64Array, rateHertz: number): Line[] {
  const size = 4 * response.length;
  const fft = new FFT(size);
  const [input, output] = [fft.createComplexArray(), fft.createComplexArray()];
  response.forEach((value, n) => {
    input[2 * n] = value;
  });
  fft.transform(output, input);
  let turned = 0;
  return Array.from({ length: size / 2 + 1 }, (_, k) => {
    const [re, im] = [output[2 * k]!, output[2 * k + 1]!];
    const [lastRe, lastIm] = k === 0 ? [re, im] : [output[2 * k - 2]!, output[2 * k - 1]!];
    turned += Math.atan2(im * lastRe - re * lastIm, re * lastRe + im * lastIm) / Math.PI;
    return { hertz: (k * rateHertz) / size, decibels: 20 * Math.log10(Math.hypot(re, im)), halfTurns: turned };
  });
}

describe.each(RATES_HERTZ)('heard through, at %d Hz', (rateHertz) => {
  it.each(CURVES.map((curve) => [curve.name, curve] as const))('%s: the curve, minimum phase, at once', (_, curve) => {
    const response = click(curve, rateHertz);
    const lines = spectrum(response, rateHertz);
    const top = Math.min(16_000, 0.4 * rateHertz);
    let worst = 0;
    for (const { hertz, decibels } of lines) {
      if (hertz < 50 || hertz > top) continue;
      worst = Math.max(worst, Math.abs(decibels - (curveDecibels(curve, hertz) - curveDecibels(curve, 400))));
    }
    // 0.1 dB, the tenth part of what an ear notices; known curves are met within 0.001 dB, the own points' sharp bend at
    // 100 Hz within 0.06 dB
    expect(worst, 'dB off the curve re 400 Hz').toBeLessThan(0.1);
    // A causal filter without zeros outside the unit circle turns its phase by nothing from 0 Hz to half the rate; each
    // zero outside turns it by half a turn (A. V. Oppenheim and R. W. Schafer, Discrete-Time Signal Processing, 1989,
    // chapter 5, from memory). 1e-6: sums of 1e5 small angles.
    expect(Math.abs(lines.at(-1)!.halfTurns), 'half turns of phase').toBeLessThan(1e-6);
    // half a millisecond: half a period of 1 kHz, about the middle of all these curves; a filter of linear phase as
    // long as this one would wait 80 ms
    const energy = response.reduce((sum, value) => sum + value * value, 0);
    let [early, n] = [0, 0];
    while (early < energy / 2) early += response[n++]! ** 2;
    expect(n / rateHertz, 's until half of the energy').toBeLessThan(0.5e-3);
  });
});

describe('heard through', () => {
  const rateHertz = 48_000;
  const phones = HEARING_CURVES.find(({ name }) => name === 'magnetic phones')!;

  it('flat changes nothing', () => {
    const samples = Float64Array.from({ length: 1000 }, (_, n) => Math.sin(n * n));
    expect(heardThrough(samples, HEARING_CURVES[0]!, rateHertz)).toEqual(samples);
  });

  it('nothing is heard before it sounds, and the length stays', () => {
    const samples = new Float64Array(70_000);
    samples[50_000] = 1;
    const heard = heardThrough(samples, phones, rateHertz);
    expect(heard.length).toBe(samples.length);
    const first = click(phones, rateHertz);
    const off = heard.map((value, n) => Math.abs(value - (n < 50_000 ? 0 : (first[n - 50_000] ?? 0))));
    // 1e-12: rounding of transforms of 32768 points on numbers up to 1
    expect(off.reduce((most, value) => Math.max(most, value), 0)).toBeLessThan(1e-12);
  });

  // lengths about the blocks of the convolution, whose seams must not show
  it.each([1, 5000, 24_577, 49_154, 60_000])('a clip of %d samples is the sum of its clicks', (length) => {
    const samples = Float64Array.from({ length }, (_, n) => Math.sin(0.05 * n) + 0.3 * Math.cos(0.7 * n));
    const first = click(phones, rateHertz);
    const heard = heardThrough(samples, phones, rateHertz);
    for (const n of [0, 1, 4999, 24_576, 24_577, 30_000, 49_153, 49_154, length - 1]) {
      if (n >= length) continue;
      let sum = 0;
      for (let k = 0; k <= n && k < first.length; k++) sum += first[k]! * samples[n - k]!;
      // 1e-11: the sum's own rounding over some ten thousand products
      expect(Math.abs(heard[n]! - sum), `sample ${n}`).toBeLessThan(1e-11);
    }
  });

  it("between a builder's points the curve is straight over log frequency, and level beyond its ends", () => {
    // worked by hand: the geometric middle of 100 and 300 Hz, of 3 and 6 kHz; 1e-9 dB is rounding
    expect(curveDecibels(OWN, Math.sqrt(100 * 300))).toBeCloseTo(-10, 9);
    expect(curveDecibels(OWN, Math.sqrt(3000 * 6000))).toBeCloseTo(-1, 9);
    for (const { hertz, decibels } of OWN.points!) expect(curveDecibels(OWN, hertz)).toBeCloseTo(decibels, 9);
    expect(curveDecibels(OWN, 20)).toBe(-20);
    expect(curveDecibels(OWN, 20_000)).toBe(-40);
  });
});
