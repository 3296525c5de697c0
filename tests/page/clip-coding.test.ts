import { describe, expect, it } from 'vitest';
import { bytesOfSamples, losslessCoding, samplesOfBytes } from '../../src/page/clip-coding.ts';

describe('a clip in a page', () => {
  it.each([
    ['16', [0, 1 / 32_768, -1, 32_767 / 32_768, 0.5]],
    // half the sum of two 16-bit sides has 17 bits
    ['24', [0, 1 / 65_536, -1, 8_388_607 / 8_388_608, -3 / 8_388_608]],
    ['32f', [0, Math.fround(0.1), 1.5, -Math.fround(1e-20)]],
    ['64f', [0, 0.1, 1 / 3, -2.5]],
  ] as const)('comes back as it is by %s bits, the smallest coding that does', (coding, values) => {
    const samples = Float64Array.from(values);
    expect(losslessCoding(samples)).toBe(coding);
    const bytes = bytesOfSamples(samples, coding);
    expect([...samplesOfBytes(bytes, coding)]).toEqual([...samples]);
    // an odd place in a larger buffer reads the same
    const moved = new Uint8Array(bytes.length + 3);
    moved.set(bytes, 3);
    expect([...samplesOfBytes(moved.subarray(3), coding)]).toEqual([...samples]);
  });
});
