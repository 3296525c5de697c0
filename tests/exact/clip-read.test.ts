import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { readClip } from '../../src/cli/clip-read.ts';
import { InputError } from '../../src/engine/errors.ts';
import { plainWav, text, u16 } from './wav-crafting.ts';

let folder = '';
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'clip-read-'));
});
afterAll(() => {
  rmSync(folder, { recursive: true });
});

function saved(name: string, bytes: Uint8Array | string): string {
  const path = join(folder, name);
  writeFileSync(path, bytes);
  return path;
}

async function codeOf(path: string): Promise<string> {
  try {
    await readClip(path);
  } catch (error) {
    expect(error).toBeInstanceOf(InputError);
    const [fault] = (error as InputError).faults;
    expect(fault!.where).toBe(path);
    return fault!.code;
  }
  return 'read';
}

/** Big-endian bytes. */
function big(value: number, bytes: number): number[] {
  return Array.from({ length: bytes }, (_, i) => Math.floor(value / 256 ** (bytes - 1 - i)) % 256);
}

/** Remainder of a message by a polynomial without its top bit, as FLAC's frame header (8 bits) and frame (16) use it. */
function remainder(message: readonly number[], polynomial: number, bits: 8 | 16): number {
  let crc = 0;
  for (const byte of message) {
    crc ^= byte << (bits - 8);
    for (let i = 0; i < 8; i++) crc = ((crc << 1) ^ (crc & (1 << (bits - 1)) ? polynomial : 0)) & (2 ** bits - 1);
  }
  return crc;
}

/**
 * A FLAC file of one frame with its samples verbatim: 16 bits, mono, 44.1 kHz, at most 256 samples.
 * Layout: RFC 9639, Free Lossless Audio Codec (from memory).
 */
function flac(samples: readonly number[]): Uint8Array {
  const count = samples.length;
  // 20 bits of rate, 3 of channels − 1, 5 of bits − 1, 36 of sample count
  const rateChannelsBits = (44_100 * 2 ** 12 + 0 * 2 ** 9 + 15 * 2 ** 4) % 2 ** 32;
  const streamInfo = [
    ...big(count, 2),
    ...big(count, 2),
    0,
    0,
    0,
    0,
    0,
    0,
    ...big(rateChannelsBits, 4),
    ...big(count, 4),
    ...Array(16).fill(0),
  ];
  // sync, fixed block size; size in 8 bits at the end, 44.1 kHz; mono, 16 bits; frame 0; size − 1
  const header = [0xff, 0xf8, 0x69, 0x08, 0x00, count - 1];
  const frame = [
    ...header,
    remainder(header, 0x07, 8),
    0x02,
    ...samples.flatMap((v) => big(v < 0 ? v + 65_536 : v, 2)),
  ];
  return Uint8Array.from([
    ...text('fLaC'),
    0x80,
    ...big(streamInfo.length, 3),
    ...streamInfo,
    ...frame,
    ...big(remainder(frame, 0x8005, 16), 2),
  ]);
}

describe('a clip is read', () => {
  it('from WAV, by content whatever its name', async () => {
    const wav = plainWav({}, [...u16(16_384), ...u16(65_535)]);
    for (const name of ['a.wav', 'b.dat', 'ü 日本.WAV']) {
      const sound = await readClip(saved(name, wav));
      expect([...sound.channels[0]!]).toEqual([0.5, -1 / 32_768]);
    }
  });

  it('from FLAC, sample by sample', async () => {
    const values = Array.from({ length: 192 }, (_, n) => Math.round(20_000 * Math.sin(n / 5)));
    const sound = await readClip(saved('tone.flac', flac(values)));
    expect(sound.sampleRateHertz).toBe(44_100);
    expect(sound.frames).toBe(192);
    const heard = sound.channels[0]!;
    // the package scales positive samples by 1/32767: 0.0003 dB, never heard, its own affair; 1e-7 for single precision
    heard.forEach((value, n) => {
      const exact = values[n]! / 32_768;
      expect(Math.abs(value - exact)).toBeLessThanOrEqual(Math.abs(exact) / 32_767 + 1e-7);
    });
  });
});

describe('what is no clip is refused by name', () => {
  it.each([
    ['nothing there', () => join(folder, 'none.wav'), 'clip-missing'],
    ['a file taken for a folder', () => join(saved('file', 'x'), 'deeper.wav'), 'clip-missing'],
    ['a folder', () => folder, 'clip-directory'],
    ['a name with a NUL', () => 'a\0b.wav', 'clip-missing'],
    ['an empty file', () => saved('empty.wav', ''), 'clip-empty'],
    ['a parts list', () => saved('list.yaml', 'name: set\nplate:\n  bypass: 220 pF\n'), 'clip-text'],
    ['a parts list that calls itself WAV', () => saved('list.wav', 'name: set\n'), 'clip-text'],
    [
      'noise',
      () =>
        saved(
          'noise.bin',
          Uint8Array.from({ length: 300 }, (_, n) => (n * n * 31) % 251),
        ),
      'clip-undecodable',
    ],
    ['noise that calls itself WAV', () => saved('noise.wav', Uint8Array.of(1, 2, 3, 0, 5)), 'wav-not-riff'],
    ['a FLAC file cut in its header', () => saved('cut.flac', flac([1, 2, 3]).slice(0, 20)), 'clip-undecodable'],
    [
      'an Ogg file with nothing in it',
      () => saved('a.ogg', Uint8Array.from([...text('OggS'), ...Array(60).fill(0)])),
      'clip-undecodable',
    ],
  ])('%s', async (_, path, code) => {
    expect(await codeOf(path())).toBe(code);
  });

  it('a device', async () => {
    if (process.platform === 'win32') return;
    expect(await codeOf('/dev/null')).toBe('clip-not-a-file');
  });
});
