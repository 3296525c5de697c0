import { describe, expect, it } from 'vitest';
import type { Envelope } from '../../src/engine/station/envelope.ts';
import { addNoise, addStatic, crashes } from '../../src/engine/station/noise.ts';

const RATE = 48_000;
const still = (frames: number): Envelope => ({
  modulation: new Float64Array(frames),
  quadrature: new Float64Array(frames),
});
const meanSquare = (values: Float64Array): number =>
  values.reduce((sum, value) => sum + value * value, 0) / values.length;

/** Mean square of an envelope within a band about the carrier, from spectra of blocks. */
function powerWithin({ modulation, quadrature }: Envelope, bandHertz: number): number {
  const length = 480;
  const bins = Math.round((bandHertz / RATE) * length);
  let sum = 0;
  let blocks = 0;
  for (let from = 0; from + length <= modulation.length; from += length, blocks++) {
    // one bin less the edge's half on each side: bins −b/2 to b/2, the outermost counted half
    for (let bin = -bins / 2; bin <= bins / 2; bin++) {
      let re = 0;
      let im = 0;
      for (let n = 0; n < length; n++) {
        const angle = (-2 * Math.PI * bin * n) / length;
        const [c, s] = [Math.cos(angle), Math.sin(angle)];
        re += modulation[from + n]! * c - quadrature[from + n]! * s;
        im += modulation[from + n]! * s + quadrature[from + n]! * c;
      }
      sum += ((Math.abs(bin) === bins / 2 ? 0.5 : 1) * (re * re + im * im)) / length ** 2;
    }
  }
  return sum / blocks;
}

describe('noise', () => {
  const noise = { levelVoltsRms: 20e-6, bandHertz: 4000 };
  const envelope = still(RATE);
  addNoise(envelope, noise, 1e-3, RATE, 7);

  it('has the stated volts in the stated band', () => {
    // 100 blocks of 40 bins, each an exponential number: its mean is uncertain by 1/√4000 = 1.6 %; four of those
    expect(Math.abs(powerWithin(envelope, 4000) / (20e-6 / 1e-3) ** 2 - 1)).toBeLessThan(0.064);
  });

  it('is even: all of the sample rate holds as much more, half of it in each part', () => {
    const each = ((20e-6 / 1e-3) ** 2 * RATE) / 4000 / 2;
    // a mean square of 48,000 normal numbers is uncertain by √(2/48000) = 0.65 %; four of those
    expect(Math.abs(meanSquare(envelope.modulation) / each - 1)).toBeLessThan(0.026);
    expect(Math.abs(meanSquare(envelope.quadrature) / each - 1)).toBeLessThan(0.026);
    // the two parts have nothing to do with each other: four times 1/√48000
    const cross = envelope.modulation.reduce((sum, value, n) => sum + value * envelope.quadrature[n]!, 0) / RATE;
    expect(Math.abs(cross / each)).toBeLessThan(0.018);
  });

  it('is Gaussian: 68.27, 95.45 and 99.73 % within one, two and three deviations', () => {
    const deviation = Math.sqrt(meanSquare(envelope.modulation));
    for (const [times, share] of [
      [1, 0.682_689],
      [2, 0.954_5],
      [3, 0.997_3],
    ] as const) {
      const within = envelope.modulation.filter((value) => Math.abs(value) < times * deviation).length / RATE;
      // binomial: four times √(p(1 − p)/48000)
      expect(Math.abs(within - share)).toBeLessThan(4 * Math.sqrt((share * (1 - share)) / RATE));
    }
  });

  it('is the same for the same seed, another for another, and shorter clips hear its beginning', () => {
    const of = (seed: number, frames = 2000): Envelope => {
      const made = still(frames);
      addNoise(made, noise, 1e-3, RATE, seed);
      return made;
    };
    expect(of(3)).toEqual(of(3));
    expect(of(3).modulation).not.toEqual(of(4).modulation);
    expect(of(3, 500).quadrature).toEqual(of(3).quadrature.slice(0, 500));
  });
});

describe('static', () => {
  it('comes by chance: as many crashes as stated, sizes of mean 1', () => {
    const found = crashes(5, 1000, 11);
    // Poisson: 5000 within four times √5000; the mean of exponential sizes within four times 1/√5000
    expect(Math.abs(found.length - 5000)).toBeLessThan(283);
    expect(Math.abs(found.reduce((sum, { size }) => sum + size, 0) / found.length - 1)).toBeLessThan(0.057);
    // waits are exponential: e^−1 of them are longer than the mean
    const long = found.filter(({ seconds }, k) => k > 0 && seconds - found[k - 1]!.seconds > 0.2).length / found.length;
    expect(Math.abs(long - Math.exp(-1))).toBeLessThan(4 * Math.sqrt(0.2325 / 5000));
    expect(crashes(0, 10, 1)).toEqual([]);
  });

  it('dies away by the stated time', () => {
    const statics = { levelVoltsRms: 1e-3, bandHertz: 10_000, crashesPerSecond: 0.2, decaySeconds: 0.05 };
    const envelope = still(10 * RATE);
    addStatic(envelope, statics, 1e-3, RATE, 5);
    const [first] = crashes(0.2, 10, 5);
    const start = Math.ceil(first!.seconds * RATE);
    const power = (from: number): number => {
      const part = {
        modulation: envelope.modulation.slice(from, from + 960),
        quadrature: envelope.quadrature.slice(from, from + 960),
      };
      return meanSquare(part.modulation) + meanSquare(part.quadrature);
    };
    expect(power(start - 1920)).toBe(0);
    // mean over 20 ms of size²·rate/band·e^(−2t/τ); 960 pairs: 1/√960 = 3.2 %, four of those, and as much again for the
    // greater weight of the first samples
    const whole = (first!.size ** 2 * RATE) / 10_000;
    for (const decays of [0, 1, 2]) {
      const begin = decays * 0.05;
      const expected =
        (whole * 0.05 * (Math.exp((-2 * begin) / 0.05) - Math.exp((-2 * (begin + 0.02)) / 0.05))) / 2 / 0.02;
      expect(Math.abs(power(start + decays * 2400) / expected - 1), `after ${decays} decays`).toBeLessThan(0.2);
    }
  });
});
