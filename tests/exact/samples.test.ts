import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { realSpectrum } from '../../src/engine/measure/spectrum.ts';
import { readWav } from '../../src/results/wav-read.ts';
import { composeMusic } from '../tools/compose-music.ts';

const sampleBytes = (name: string): Uint8Array => readFileSync(new URL(`../../samples/${name}`, import.meta.url));
const sampleText = (name: string): string => new TextDecoder().decode(sampleBytes(name));

/** Samples of one stretch of a windowed power sum: 85 ms at 48 kHz, long enough to part 4 kHz from its neighbours. */
const STRETCH = 4096;

/** Share of a clip's energy above a frequency, from stretches under a raised cosine, half overlapped. */
function shareAbove(samples: Float64Array, rateHertz: number, hertz: number): number {
  let [all, above] = [0, 0];
  for (let start = 0; start + STRETCH <= samples.length; start += STRETCH / 2) {
    const stretch = samples.slice(start, start + STRETCH);
    const { real, imaginary } = realSpectrum(
      stretch.map((sample, n) => sample * (1 - Math.cos((2 * Math.PI * n) / STRETCH))),
    );
    for (let bin = 0; bin < real.length; bin++) {
      const energy = real[bin]! ** 2 + imaginary[bin]! ** 2;
      all += energy;
      if ((bin * rateHertz) / STRETCH >= hertz) above += energy;
    }
  }
  return above / all;
}

describe('the share of energy above a frequency', () => {
  it('of two sines below and above it, 20 dB apart, is 1/101', () => {
    const rate = 48_000;
    const sines = Float64Array.from(
      { length: rate },
      (_, n) => Math.sin((2 * Math.PI * 1000 * n) / rate) + 0.1 * Math.sin((2 * Math.PI * 6000 * n) / rate),
    );
    // half a percent: the stretches hold no whole number of periods, and what leaks past 4 kHz is far below that
    expect(shareAbove(sines, rate, 4000) * 101).toBeCloseTo(1, 2);
  });
});

describe.each(['speech.wav', 'music.wav'])('samples/%s', (name) => {
  const bytes = sampleBytes(name);
  const sound = readWav(bytes, name);
  const samples = sound.channels[0]!;

  it('is 10 to 14 s of mono at 48 kHz in 16 bits, without a fault, below 1.5 MB', () => {
    expect(sound.warnings).toEqual([]);
    expect(sound.channels).toHaveLength(1);
    expect(sound.sampleRateHertz).toBe(48_000);
    // bytes 34 and 35 of a plain WAV file: bits a sample
    expect([bytes[34], bytes[35]]).toEqual([16, 0]);
    expect(sound.frames / 48_000).toBeGreaterThan(10);
    expect(sound.frames / 48_000).toBeLessThan(14);
    expect(bytes.length).toBeLessThan(1.5e6);
  });

  it('peaks near full scale and never on it: nothing was clipped', () => {
    const peak = samples.reduce((most, sample) => Math.max(most, Math.abs(sample)), 0);
    expect(peak).toBeGreaterThan(0.5);
    // −0.5 dB of full scale: made for −1 dB, and a dither or fade may not eat the rest
    expect(peak).toBeLessThan(0.944);
  });

  it('starts and ends in near silence and has no direct voltage', () => {
    // 1 % of full scale is 40 dB down, under any room's noise against speech at full scale
    expect(Math.abs(samples[0]!)).toBeLessThan(0.01);
    expect(Math.abs(samples.at(-1)!)).toBeLessThan(0.01);
    // 0.1 %: thirty 16-bit steps, no audible shift of the modulation
    expect(Math.abs(samples.reduce((sum, sample) => sum + sample, 0) / samples.length)).toBeLessThan(0.001);
  });

  it('has the treble whose loss is to be heard', () => {
    // a bypass that costs 6 dB at 5 kHz must take away something: 1 % above 4 kHz is 20 dB below the whole,
    // what a close microphone gives for speech with its sibilants (common practice, no source)
    expect(shareAbove(samples, sound.sampleRateHertz, 4000)).toBeGreaterThan(0.01);
    // and something near 10 kHz, the top of what a station sends (NRSC-1 stop band): 1/1000 is 30 dB below the whole
    expect(shareAbove(samples, sound.sampleRateHertz, 8000)).toBeGreaterThan(0.001);
  });
});

describe('how the samples were made', () => {
  it('the script writes the same music, byte for byte, every time', () => {
    const composed = composeMusic();
    expect(Buffer.compare(composed, sampleBytes('music.wav'))).toBe(0);
    expect(Buffer.compare(composeMusic(), composed)).toBe(0);
  });

  it('the spoken words fit the length of the speech', () => {
    const words = sampleText('speech.txt').trim().split(/\s+/);
    const minutes = readWav(sampleBytes('speech.wav'), 'speech.wav').frames / 48_000 / 60;
    // 120 to 200 words a minute, from slow reading to brisk announcing (common practice, no source)
    expect(words.length / minutes).toBeGreaterThan(120);
    expect(words.length / minutes).toBeLessThan(200);
  });
});
