import { describe, expect, it } from 'vitest';
import { harmonics } from '../../src/engine/measure/harmonics.ts';
import { otherProgramme } from '../../src/engine/station/other-station.ts';
import { resampled } from '../../src/engine/station/resampled.ts';

const tone = (hertz: number, rate: number, seconds = 0.2): Float64Array =>
  Float64Array.from({ length: Math.round(seconds * rate) }, (_, n) => Math.cos((2 * Math.PI * hertz * n) / rate));
/** Peak of a tone in the middle tenth of a second, its phase with it. */
const measured = (samples: Float64Array, hertz: number, rate: number): { peak: number; phase: number } => {
  const from = Math.round(0.05 * rate);
  const { amplitudes, phases } = harmonics(
    samples.slice(from, from + Math.round(0.1 * rate)),
    Math.round(hertz / 10),
    1,
  );
  return { peak: amplitudes[1] as number, phase: phases[1] as number };
};

describe('a clip at another rate', () => {
  it.each([
    [44_100, 48_000],
    [48_000, 44_100],
    [22_050, 48_000],
    [96_000, 48_000],
    [48_000, 96_000],
    [8000, 11_000],
  ])('%d to %d Hz: as loud, in time', (from, to) => {
    const lower = Math.min(from, to);
    for (const share of [0.01, 0.2, 0.44]) {
      const hertz = 10 * Math.round((share * lower) / 10);
      const { peak, phase } = measured(resampled(tone(hertz, from), from, to), hertz, to);
      // 1e-4: 100 dB of stop band gives as much ripple, 1e-5, and the kernel's straight lines 2e-6
      expect(peak, `${hertz} Hz`).toBeCloseTo(1, 4);
      // 0.05 s is a whole number of periods of 20 Hz; odd tens begin half way
      expect(Math.cos(phase - 2 * Math.PI * hertz * (Math.round(0.05 * to) / to))).toBeCloseTo(1, 7);
    }
  });

  it('what the lower rate cannot hold does not fold back', () => {
    for (const hertz of [24_100, 30_000, 40_000]) {
      const folded = resampled(tone(hertz, 96_000), 96_000, 48_000).slice(2400, 7200);
      // 100 dB, and 3 dB for the sum of ripples at one place
      expect(Math.max(...folded.map(Math.abs))).toBeLessThan(1.4e-5);
    }
  });

  it('the same rate is the same clip', () => {
    const clip = tone(1000, 48_000);
    expect(resampled(clip, 48_000, 48_000)).toEqual(clip);
  });
});

describe("the other station's programme", () => {
  const station = { offsetHertz: 9000, levelVoltsRms: 1, modulation: 0.5, channelLimit: '9 kHz' } as const;

  it('keeps to its channel and its depth, and begins again when it ends', () => {
    const once = otherProgramme(tone(1000, 44_100), 44_100, station, 48_000, 48_000);
    expect(Math.max(...once.map(Math.abs))).toBeLessThanOrEqual(0.5);
    expect(measured(once, 1000, 48_000).peak).toBeGreaterThan(0.47);
    expect(once.slice(0, 4000)).toEqual(once.slice(9600, 13_600));
    const high = tone(6000, 44_100);
    const mixed = tone(1000, 44_100).map((value, n) => value + high[n]!);
    const limited = otherProgramme(mixed, 44_100, station, 9600, 48_000);
    // 100 dB of stop band, and the ends of the clip, where the tone begins at once
    expect(measured(limited, 6000, 48_000).peak).toBeLessThan(1e-5);
  });

  it('no clip is a carrier alone', () => {
    expect(otherProgramme(new Float64Array(0), 48_000, station, 100, 48_000)).toEqual(new Float64Array(100));
  });
});
