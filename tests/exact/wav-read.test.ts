import { describe, expect, it } from 'vitest';
import { readWav } from '../../src/results/wav-read.ts';
import { chunk, extensibleBody, float32, float64, formatBody, plainWav, riff, text, u16, u32 } from './wav-crafting.ts';

const first = (file: Uint8Array): number[] => [...(readWav(file, 'clip.wav').channels[0] ?? [])];

/** Two's complement of `bits`, little-endian. */
function integer(value: number, bits: number): number[] {
  const wrapped = value < 0 ? value + 2 ** bits : value;
  return Array.from({ length: bits / 8 }, (_, byte) => Math.floor(wrapped / 256 ** byte) % 256);
}

describe('samples come out as their integer over the full scale 2^(n−1), exactly', () => {
  it('8 bits: 128 is silence, 0 is −1, 255 is 127/128', () => {
    expect(first(plainWav({ bits: 8 }, [128, 0, 255, 129, 127]))).toEqual([0, -1, 127 / 128, 1 / 128, -1 / 128]);
  });

  it('16 bits: every one of the 65 536 values', () => {
    const values = Array.from({ length: 65_536 }, (_, i) => i - 32_768);
    const read = first(
      plainWav(
        {},
        values.flatMap((value) => integer(value, 16)),
      ),
    );
    expect(read).toEqual(values.map((value) => value / 32_768));
  });

  it('24 bits: both extremes, their neighbours and single bits', () => {
    const values = [-8_388_608, -8_388_607, 8_388_607, 8_388_606, 0, 1, -1, 255, 256, -256, 65_536, -65_537, 4_194_304];
    const read = first(
      plainWav(
        { bits: 24 },
        values.flatMap((value) => integer(value, 24)),
      ),
    );
    expect(read).toEqual(values.map((value) => value / 8_388_608));
    expect(read[0]).toBe(-1);
  });

  it('32 bits: exact where 24 bits hold the number, else rounded to a 32-bit float', () => {
    const values = [-2_147_483_648, 0, 256, -256, 1_073_741_824, 2_147_483_647, 123_456_789];
    const read = first(
      plainWav(
        { bits: 32 },
        values.flatMap((value) => integer(value, 32)),
      ),
    );
    expect(read).toEqual(values.map((value) => Math.fround(value / 2_147_483_648)));
  });

  it('floats of 32 bits unchanged, above full scale too; of 64 bits rounded to 32', () => {
    const values = [0, 1, -1, 0.1, -1e-20, 3.5];
    expect(first(plainWav({ tag: 3, bits: 32 }, values.flatMap(float32)))).toEqual(values.map(Math.fround));
    expect(first(plainWav({ tag: 3, bits: 64 }, values.flatMap(float64)))).toEqual(values.map(Math.fround));
  });

  it('a sine in 16 bits keeps its mean of zero: no direct voltage from an uneven scale', () => {
    const values = [16_384, -16_384, 32_767, -32_767];
    const read = first(
      plainWav(
        {},
        values.flatMap((value) => integer(value, 16)),
      ),
    );
    expect(read.reduce((sum, value) => sum + value, 0)).toBe(0);
  });

  it('two channels are told apart', () => {
    const sound = readWav(
      plainWav(
        { channels: 2 },
        [1, -2, 3, -4].flatMap((v) => integer(v, 16)),
      ),
      'clip.wav',
    );
    expect(sound.frames).toBe(2);
    expect(sound.channels.map((channel) => [...channel])).toEqual([
      [1 / 32_768, 3 / 32_768],
      [-2 / 32_768, -4 / 32_768],
    ]);
  });
});

describe('containers that are in order though not plain', () => {
  const data = chunk('data', integer(12_345, 16));
  const sample = [12_345 / 32_768];

  it.each([
    ['a list before the data', riff(chunk('fmt ', formatBody()), chunk('LIST', text('INFOICMTabcd')), data)],
    [
      'an odd chunk with its pad byte before the format',
      riff(chunk('odd ', [1, 2, 3]), chunk('fmt ', formatBody()), data),
    ],
    ['an odd chunk with its pad byte before the data', riff(chunk('fmt ', formatBody()), chunk('odd ', [1]), data)],
    [
      'an odd chunk whose writer left the pad byte out',
      riff(chunk('fmt ', formatBody()), [...text('odd '), ...u32(3), 7, 7, 7], data),
    ],
    ['an empty chunk', riff(chunk('fmt ', formatBody()), chunk('void', []), data)],
    ['chunks after the data', riff(chunk('fmt ', formatBody()), data, chunk('LIST', text('INFO')))],
    ['a second data chunk, which is left alone', riff(chunk('fmt ', formatBody()), data, chunk('data', [1, 1, 1, 1]))],
    ['a format chunk of 18 bytes', riff(chunk('fmt ', [...formatBody(), 0, 0]), data)],
    ['an extensible format', riff(chunk('fmt ', extensibleBody(1)), data)],
    [
      'a wrong RIFF size',
      Uint8Array.from([...text('RIFF'), ...u32(7), ...riff(chunk('fmt ', formatBody()), data).slice(8)]),
    ],
  ])('%s', (_, file) => {
    const sound = readWav(file, 'clip.wav');
    expect([...sound.channels[0]!]).toEqual(sample);
    expect(sound.warnings).toEqual([]);
    expect(sound.sampleRateHertz).toBe(48_000);
  });

  it('extensible: 24 bits, 20 valid bits in 24 (left-justified), 32- and 64-bit float', () => {
    const file = (subTag: number, bits: number, valid: number, body: number[]): Uint8Array =>
      riff(chunk('fmt ', extensibleBody(subTag, { bits }, valid)), chunk('data', body));
    expect(first(file(1, 24, 24, integer(-8_388_608, 24)))).toEqual([-1]);
    expect(first(file(1, 24, 20, integer(16, 24)))).toEqual([16 / 8_388_608]);
    expect(first(file(3, 32, 32, float32(0.25)))).toEqual([0.25]);
    expect(first(file(3, 64, 64, float64(-0.25)))).toEqual([-0.25]);
  });

  it('a view into a larger buffer is read from where it starts', () => {
    const file = plainWav({}, integer(-3, 16));
    const larger = new Uint8Array(file.length + 13);
    larger.set(file, 7);
    expect(first(larger.subarray(7, 7 + file.length))).toEqual([-3 / 32_768]);
  });

  it.each([8_000, 11_025, 44_100, 192_000])('%i Hz is a rate a clip may have', (rate) => {
    expect(readWav(plainWav({ rate }, [0, 0]), 'clip.wav').sampleRateHertz).toBe(rate);
  });

  it('sizes of crafted files are those of the file format', () => {
    // 8-bit mono, 3 samples: data size 3, RIFF size 40, 48 bytes; headers of 44, 58, 68 and 80 bytes
    // (calculated from the chunk rules of Microsoft and IBM, Multimedia Programming Interface 1.0, from memory)
    const eight = plainWav({ bits: 8 }, [1, 2, 3]);
    expect([eight.length, ...eight.slice(4, 8), ...eight.slice(40, 44)]).toEqual([48, ...u32(40), ...u32(3)]);
    const fact = chunk('fact', u32(1));
    expect(plainWav({}, []).length).toBe(44);
    expect(riff(chunk('fmt ', [...formatBody({ tag: 3, bits: 32 }), 0, 0]), fact, chunk('data', [])).length).toBe(58);
    expect(riff(chunk('fmt ', extensibleBody(1)), chunk('data', [])).length).toBe(68);
    expect(riff(chunk('fmt ', extensibleBody(1)), fact, chunk('data', [])).length).toBe(80);
  });
});

describe('files that are damaged yet readable are read, with a warning', () => {
  const body = [1, 2, 3].flatMap((value) => integer(value, 16));
  const withSize = (size: number, bytes: readonly number[] = body): Uint8Array =>
    riff(chunk('fmt ', formatBody()), [...text('data'), ...u32(size), ...bytes]);

  it.each([0, 0xffff_ffff, 0x7fff_f000, 0x7fff_ffff])('data size %i of a stream: read to the end', (size) => {
    const sound = readWav(withSize(size), 'clip.wav');
    expect(sound.frames).toBe(3);
    expect(sound.warnings).toEqual([expect.stringContaining('length is not stated')]);
  });

  it('data cut off: read as far as it goes, and the loss is counted', () => {
    const sound = readWav(withSize(100), 'clip.wav');
    expect(sound.frames).toBe(3);
    expect(sound.warnings).toEqual([expect.stringContaining('94 of 100 bytes')]);
  });

  it('data cut off within a sample', () => {
    const sound = readWav(withSize(6, body.slice(0, 5)), 'clip.wav');
    expect(sound.frames).toBe(2);
    expect(sound.warnings).toHaveLength(1);
  });

  it('data that is no whole number of samples', () => {
    const sound = readWav(withSize(5, [...body.slice(0, 5), 0]), 'clip.wav');
    expect(sound.frames).toBe(2);
    expect(sound.warnings).toEqual([expect.stringContaining('last 1 bytes')]);
  });

  it('samples that are no numbers become 0 and are counted', () => {
    const values = [0.5, Number.NaN, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY, -0.5];
    const sound = readWav(plainWav({ tag: 3, bits: 32 }, values.flatMap(float32)), 'clip.wav');
    expect([...sound.channels[0]!]).toEqual([0.5, 0, 0, 0, -0.5]);
    expect(sound.warnings).toEqual([expect.stringContaining('3 samples are no number')]);
  });

  it('a 64-bit float beyond 32-bit floats counts as no number', () => {
    const sound = readWav(plainWav({ tag: 3, bits: 64 }, float64(1e300)), 'clip.wav');
    expect([...sound.channels[0]!]).toEqual([0]);
    expect(sound.warnings).toEqual([expect.stringContaining('1 sample is no number')]);
  });

  it('u16 and u32 of the crafting are little-endian', () => {
    expect([...u16(0x1234), ...u32(0xfedc_ba98)]).toEqual([0x34, 0x12, 0x98, 0xba, 0xdc, 0xfe]);
  });
});
