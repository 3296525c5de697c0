import fc from 'fast-check';
import { expect } from 'vitest';
import { InputError } from '../../src/engine/errors.ts';
import { readWav } from '../../src/results/wav-read.ts';
import { chunk, extensibleBody, formatBody, plainWav, riff, text } from './wav-crafting.ts';

const some = (count: number): number[] => Array.from({ length: count }, (_, n) => (n * 37 + 11) % 256);

/** Files in order, from which the damaged ones are made. */
export const BASES = [
  plainWav({}, some(64)),
  plainWav({ bits: 8 }, some(33)),
  plainWav({ bits: 24, channels: 2 }, some(60)),
  plainWav({ bits: 32 }, some(64)),
  plainWav({ tag: 3, bits: 32 }, some(64)),
  plainWav({ tag: 3, bits: 64, channels: 2 }, some(64)),
  riff(chunk('fmt ', extensibleBody(1, { bits: 24 })), chunk('LIST', text('INFOISFTx')), chunk('data', some(60))),
  riff(
    chunk('odd ', [1, 2, 3]),
    chunk('fmt ', [...formatBody(), 0, 0]),
    chunk('fact', [4, 0, 0, 0]),
    chunk('data', some(20)),
  ),
];

type Damage =
  | { readonly kind: 'set'; readonly at: number; readonly byte: number }
  | { readonly kind: 'size'; readonly at: number; readonly size: number }
  | { readonly kind: 'cut'; readonly at: number }
  | { readonly kind: 'remove'; readonly at: number; readonly count: number }
  | { readonly kind: 'insert'; readonly at: number; readonly bytes: readonly number[] };

const byte = fc.integer({ min: 0, max: 255 });
// nine in ten within the headers, where structure is
const place = fc.oneof(
  { weight: 9, arbitrary: fc.integer({ min: 0, max: 60 }) },
  { weight: 1, arbitrary: fc.nat(150) },
);
const damage: fc.Arbitrary<Damage> = fc.oneof(
  fc.record({ kind: fc.constant('set' as const), at: place, byte }),
  fc.record({
    kind: fc.constant('size' as const),
    at: place,
    size: fc.constantFrom(0, 1, 2, 3, 7, 0x7fff_ffff, 0x8000_0000, 0xffff_fff7, 0xffff_ffff),
  }),
  fc.record({ kind: fc.constant('cut' as const), at: place }),
  fc.record({ kind: fc.constant('remove' as const), at: place, count: fc.integer({ min: 1, max: 9 }) }),
  fc.record({ kind: fc.constant('insert' as const), at: place, bytes: fc.array(byte, { minLength: 1, maxLength: 9 }) }),
);

function damaged(base: Uint8Array, damages: readonly Damage[]): Uint8Array {
  let bytes = [...base];
  for (const d of damages) {
    if (d.kind === 'cut') bytes = bytes.slice(0, d.at);
    else if (d.kind === 'remove') bytes.splice(d.at, d.count);
    else if (d.kind === 'insert') bytes.splice(d.at, 0, ...d.bytes);
    else {
      const values = d.kind === 'set' ? [d.byte] : [0, 8, 16, 24].map((shift) => (d.size >>> shift) & 255);
      for (const [i, value] of values.entries()) if (d.at + i < bytes.length) bytes[d.at + i] = value;
    }
  }
  return Uint8Array.from(bytes);
}

/** Reads a file and checks what must hold for any bytes; tells whether it was refused. */
export function readsOrRefuses(file: Uint8Array): 'read' | 'refused' {
  try {
    const sound = readWav(file, 'clip.wav');
    expect(sound.channels.length === 1 || sound.channels.length === 2).toBe(true);
    expect(sound.frames).toBeGreaterThan(0);
    // one byte a sample at least: a size in the header never makes memory
    expect(sound.frames).toBeLessThanOrEqual(file.length);
    for (const channel of sound.channels) {
      expect(channel.length).toBe(sound.frames);
      expect(channel.every(Number.isFinite)).toBe(true);
    }
    return 'read';
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    expect(error.faults.length).toBeGreaterThan(0);
    return 'refused';
  }
}

/** Reads many damaged files; how many were read and refused. */
export function damagedFiles(numRuns: number, seed: number): { read: number; refused: number } {
  const outcomes = { read: 0, refused: 0 };
  fc.assert(
    fc.property(fc.constantFrom(...BASES), fc.array(damage, { minLength: 1, maxLength: 4 }), (base, damages) => {
      outcomes[readsOrRefuses(damaged(base, damages))]++;
    }),
    { numRuns, seed },
  );
  return outcomes;
}

/** Files of any bytes. */
export function anyBytes(numRuns: number, seed: number): void {
  fc.assert(
    fc.property(fc.uint8Array({ maxLength: 200 }), (file) => {
      readsOrRefuses(file);
    }),
    { numRuns, seed },
  );
}
