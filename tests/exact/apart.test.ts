import { describe, expect, it } from 'vitest';
import { rootMeanSquare, steadyToneRms, takenApart } from '../../src/engine/measure/apart.ts';
import { keyedTone } from '../../src/engine/measure/keyed-tone.ts';
import { keyedCarrier } from '../../src/engine/station/morse.ts';

const RATE = 48_000;
const tone = (hertz: number, peak: number, frames = RATE): Float64Array =>
  Float64Array.from({ length: frames }, (_, n) => peak * Math.sin((2 * Math.PI * hertz * n) / RATE));
const sum = (a: Float64Array, b: Float64Array): Float64Array => a.map((value, n) => value + b[n]!);

describe('an output taken apart', () => {
  it('into what the reference accounts for and the rest', () => {
    // whole periods of both tones: nothing in common, so all is exact to rounding
    const { gain, wantedVoltsRms, restVoltsRms, rest } = takenApart(sum(tone(400, -0.3), tone(900, 0.2)), tone(400, 1));
    expect(gain).toBeCloseTo(-0.3, 12);
    expect(wantedVoltsRms).toBeCloseTo(0.3 / Math.SQRT2, 12);
    expect(restVoltsRms).toBeCloseTo(0.2 / Math.SQRT2, 12);
    expect(rootMeanSquare(sum(rest, tone(900, -0.2)))).toBeLessThan(1e-12);
  });

  it('silence has nothing of anything', () => {
    expect(takenApart(tone(400, 1), new Float64Array(RATE)).gain).toBe(0);
    expect(rootMeanSquare(new Float64Array(0))).toBe(0);
  });
});

describe('a steady tone', () => {
  it('is measured beside others, at a frequency that fits no period', () => {
    const samples = sum(tone(9000.3, 0.01), tone(8990, 1));
    // 10 Hz away in 1 s is ten side lobes of the window, which fall by 18 dB an octave: below 1e-4 of the neighbour
    expect(Math.abs(steadyToneRms(samples, 9000.3, RATE) / (0.01 / Math.SQRT2) - 1)).toBeLessThan(0.02);
    expect(steadyToneRms(new Float64Array(0), 1000, RATE)).toBe(0);
  });
});

describe('a keyed tone', () => {
  const keyed = (edgeSeconds: number, pitch: number): Float64Array => {
    const carrier = keyedCarrier({ text: 'PA', wordsPerMinute: 20, edgeSeconds }, RATE, 'text');
    return carrier.map((value, n) => 0.5 * value * Math.sin((2 * Math.PI * pitch * n) / RATE));
  };

  it.each([
    [2e-3, 2000],
    [5e-3, 800],
    [20e-3, 600],
  ])('edges of %d s at %d Hz: its level, and 10 to 90 % in 0.590 of the edge', (edge, pitch) => {
    const { voltsRms, riseSeconds } = keyedTone(keyed(edge, pitch), pitch, RATE);
    // the averaging is whole periods long; 1e-3: marks of 60 ms hold level samples enough
    expect(voltsRms / (0.5 / Math.SQRT2)).toBeCloseTo(1, 3);
    // 4 %: rises added as squares, as stated
    expect(Math.abs((riseSeconds as number) / (0.5903 * edge) - 1)).toBeLessThan(0.04);
  });

  it('a thump of the key, five times the tone, is not taken for its edge', () => {
    const carrier = keyedCarrier({ text: 'PA', wordsPerMinute: 20, edgeSeconds: 5e-3 }, RATE, 'text');
    // through a coupling of 10 ms
    let held = 0;
    const thumped = keyed(5e-3, 800).map((value, n) => {
      held += (carrier[n]! - held) / 480;
      return value + 2.5 * (carrier[n]! - held);
    });
    const { voltsRms, riseSeconds } = keyedTone(thumped, 800, RATE);
    // 2 % of level, 15 % of rise: what the thump itself holds at 800 Hz
    expect(Math.abs(voltsRms / (0.5 / Math.SQRT2) - 1)).toBeLessThan(0.02);
    expect(Math.abs((riseSeconds as number) / (0.5903 * 5e-3) - 1)).toBeLessThan(0.15);
  });

  it('soft edges are narrower, and silence has no rise', () => {
    const hard = keyedTone(keyed(1e-4, 800), 800, RATE).bandwidthHertz;
    expect(keyedTone(keyed(30e-3, 800), 800, RATE).bandwidthHertz).toBeLessThan(0.6 * hard);
    expect(keyedTone(new Float64Array(4800), 800, RATE)).toEqual({ voltsRms: 0, riseSeconds: null, bandwidthHertz: 0 });
  });
});
