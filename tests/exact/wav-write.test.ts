import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/engine/errors.ts';
import { readWav } from '../../src/results/wav-read.ts';
import { type WavToWrite, wavFileBytes, writeWav } from '../../src/results/wav-write.ts';
import { text, u16, u32 } from './wav-crafting.ts';

const write = (samples: readonly number[], options: Partial<WavToWrite> = {}) =>
  writeWav({
    samples: Float64Array.from(samples),
    sampleRateHertz: 48_000,
    format: '24',
    comment: '',
    ditherSeed: null,
    ...options,
  });

/** The little-endian two's complement integers of a file's data, by hand. */
function integers(bytes: Uint8Array, count: number, width: number): number[] {
  return Array.from({ length: count }, (_, n) => {
    const unsigned = [...bytes.subarray(44 + n * width, 44 + (n + 1) * width)].reduce(
      (sum, b, i) => sum + b * 256 ** i,
      0,
    );
    return unsigned >= 2 ** (8 * width - 1) ? unsigned - 2 ** (8 * width) : unsigned;
  });
}

describe('integers', () => {
  it('24 bits: the nearest step, halves to even, full scale held on both sides', () => {
    const step = 2 ** -23;
    const samples = [0, step, -step, 0.5 * step, 1.5 * step, -0.5 * step, -1.5 * step, 1 - step, 1, -1, 1.7, -1.7];
    const { bytes, clippedSamples } = write(samples);
    expect(integers(bytes, samples.length, 3)).toEqual([
      0, 1, -1, 0, 2, 0, -2, 8_388_607, 8_388_607, -8_388_608, 8_388_607, -8_388_608,
    ]);
    expect(clippedSamples).toBe(2);
  });

  it('24 bits near full scale: rounded from the 64-bit sample, not from its 32-bit float', () => {
    // 0.4999 of a step above n: a 32-bit float there resolves half steps and would push it to n + 1
    const n = 7_000_001;
    expect(integers(write([(n + 0.4999) / 2 ** 23, -(n + 0.4999) / 2 ** 23]).bytes, 2, 3)).toEqual([n, -n]);
  });

  it('16 bits without dither: the nearest step', () => {
    const samples = [0.25, -0.25, 1, -1, 0.4 / 32_768, 0.6 / 32_768];
    expect(integers(write(samples, { format: '16' }).bytes, 6, 2)).toEqual([8192, -8192, 32_767, -32_768, 0, 1]);
  });

  it('what a 16- or 24-bit file holds is written again as it was', () => {
    const steps = Array.from({ length: 4001 }, (_, i) => ((i - 2000) * 4194.1) | 0);
    const samples24 = steps.map((value) => value / 2 ** 23);
    const again = readWav(write(samples24).bytes, 'again.wav');
    expect([...again.channels[0]!]).toEqual(samples24);
    const samples16 = steps.map((value) => (value >> 8) / 2 ** 15);
    const sixteen = readWav(write(samples16, { format: '16' }).bytes, 'again.wav');
    expect([...sixteen.channels[0]!]).toEqual(samples16);
    expect(sixteen.warnings).toEqual([]);
  });
});

describe('dither at 16 bits', () => {
  const frames = 100_000;
  const level = 0.3 / 32_768;
  const errors = (seed: number): number[] =>
    integers(write(Array(frames).fill(level), { format: '16', ditherSeed: seed }).bytes, frames, 2).map((v) => v - 0.3);

  it('keeps a level of 0.3 steps on average, with an error of half a step rms', () => {
    const all = errors(1);
    const mean = all.reduce((sum, e) => sum + e, 0) / frames;
    const variance = all.reduce((sum, e) => sum + e * e, 0) / frames;
    // theory (Lipshitz, Wannamaker, Vanderkooy 1992, from memory): mean 0, variance 1/4 step². Six standard deviations
    // of the estimates: 6·0.5/√N = 0.0095 for the mean; an error is at most 1.5 steps, so its fourth moment is at most
    // 1.5²/4 and the variance's deviation √(1.5²/4 − 1/16)/√N, six of them 0.0134
    expect(Math.abs(mean)).toBeLessThan(0.0095);
    expect(Math.abs(variance - 0.25)).toBeLessThan(0.0134);
  });

  it('is white: the error does not resemble its neighbour', () => {
    const all = errors(2);
    let product = 0;
    for (let n = 1; n < frames; n++) product += all[n]! * all[n - 1]!;
    // correlation estimate of independent errors: standard deviation 0.25/√N = 0.0008; 6 of them
    expect(Math.abs(product / (frames - 1))).toBeLessThan(0.0048);
  });

  it('is the same for the same seed, another for another, and absent at 24 bits', () => {
    expect(errors(5)).toEqual(errors(5));
    expect(errors(5)).not.toEqual(errors(6));
    const options = { format: '24', ditherSeed: 5 } as const;
    expect(write([0.123], options).bytes).toEqual(write([0.123]).bytes);
  });

  it('runs from seed 0 and from negative seeds too', () => {
    for (const seed of [0, -1, 2 ** 31]) expect(new Set(errors(seed)).size).toBeGreaterThan(1);
  });
});

describe('the file around the samples', () => {
  it('integer header: 44 bytes, sizes right, pad byte after an odd sample area', () => {
    const { bytes } = write([0, 0, 0]);
    expect([...bytes]).toEqual([
      ...text('RIFF'),
      ...u32(46),
      ...text('WAVE'),
      ...text('fmt '),
      ...u32(16),
      ...u16(1),
      ...u16(1),
      ...u32(48_000),
      ...u32(144_000),
      ...u16(3),
      ...u16(24),
      ...text('data'),
      ...u32(9),
      ...Array(10).fill(0),
    ]);
  });

  it('float header: format of 18 bytes and fact, 58 bytes in all, samples above full scale kept', () => {
    const { bytes, clippedSamples } = write([0.1, -2], { format: '32f' });
    expect([...bytes.subarray(0, 58)]).toEqual([
      ...text('RIFF'),
      ...u32(58),
      ...text('WAVE'),
      ...text('fmt '),
      ...u32(18),
      ...u16(3),
      ...u16(1),
      ...u32(48_000),
      ...u32(192_000),
      ...u16(4),
      ...u16(32),
      ...u16(0),
      ...text('fact'),
      ...u32(4),
      ...u32(2),
      ...text('data'),
      ...u32(8),
    ]);
    expect([...readWav(bytes, 'f.wav').channels[0]!]).toEqual([Math.fround(0.1), -2]);
    expect(clippedSamples).toBe(0);
  });

  it('the comment stands in a list after the samples, padded to even sizes', () => {
    const { bytes } = write([0], { comment: 'odd 4µ7' });
    const comment = [...new TextEncoder().encode('odd 4µ7'), 0];
    expect(comment.length).toBe(9);
    const list = [
      ...text('INFO'),
      ...text('ICMT'),
      ...u32(9),
      ...comment,
      0,
      ...text('ISFT'),
      ...u32(10),
      ...text('Presolder'),
      0,
    ];
    expect([...bytes.subarray(48)]).toEqual([...text('LIST'), ...u32(list.length), ...list]);
    expect([...bytes.subarray(4, 8)]).toEqual(u32(bytes.length - 8));
    expect(readWav(bytes, 'c.wav')).toMatchObject({ frames: 1, warnings: [] });
  });

  it('a comment cannot end early or break the list', () => {
    const { bytes } = write([0], { comment: 'a\0b\nc' });
    expect(new TextDecoder().decode(bytes)).toContain('a b c\0');
  });
});

describe('what is refused', () => {
  it.each(['16', '24', '32f'] as const)('no number in a %s-bit file: a fault of the program', (format) => {
    for (const bad of [Number.NaN, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY]) {
      expect(() => write([0, bad], { format })).toThrow(/^internal: sample 1 /);
    }
  });

  it('a sample beyond 32-bit floats, and a rate that is no whole number', () => {
    expect(() => write([1e300], { format: '32f' })).toThrow(/^internal: sample 0 /);
    for (const sampleRateHertz of [0, 44_100.5, Number.NaN])
      expect(() => write([0], { sampleRateHertz })).toThrow(/^internal/);
  });

  it('4 GiB: the last size that fits, and the first that does not', () => {
    // 32-bit RIFF size: file size − 8 at most 2^32 − 1; with 2-byte frames the last even size is 2^32 − 2
    const frames = (2 ** 32 - 2 + 8 - 44) / 2;
    expect(wavFileBytes(frames, '16', 0)).toBe(2 ** 32 + 6);
    expect(() => wavFileBytes(frames + 1, '16', 0)).toThrow(InputError);
    expect(wavFileBytes(3, '24', 0)).toBe(54);
    expect(wavFileBytes(2, '32f', 0)).toBe(66);
  });
});
