import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/engine/errors.ts';
import { readWav } from '../../src/results/wav-read.ts';
import {
  chunk,
  extensibleBody,
  type FormatFields,
  formatBody,
  GUID_TAIL,
  plainWav,
  riff,
  text,
  u32,
} from './wav-crafting.ts';

const data = chunk('data', [1, 0, 2, 0]);
const fmt = (fields: FormatFields = {}): number[] => chunk('fmt ', formatBody(fields));
const start = (id: string, form = 'WAVE'): Uint8Array =>
  Uint8Array.from([...text(id), ...u32(40), ...text(form), ...fmt(), ...data]);
const whole = riff(fmt(), data);

/** What is wrong, the file, the code of its fault, and what the fault must say was found. */
const CASES: readonly (readonly [string, Uint8Array, string, string])[] = [
  ['empty', new Uint8Array(0), 'clip-empty', 'empty'],
  ['ASCII text', Uint8Array.from(text('tube: 6SL7-GT\nleak: 2M2\n')), 'clip-text', 'text'],
  ['UTF-8 text', new TextEncoder().encode('bypass: 4µ7\r\n'), 'clip-text', 'text'],
  [
    'UTF-8 text cut within a letter at 512 bytes',
    new TextEncoder().encode(`${'a'.repeat(511)}µ${'b'.repeat(9)}`),
    'clip-text',
    'text',
  ],
  ['UTF-16 text', Uint8Array.from([0xff, 0xfe, 0x61, 0, 0x62, 0]), 'clip-text', 'text'],
  ['4 bytes of a RIFF file', whole.slice(0, 4), 'wav-header-cut', '4 bytes'],
  ['11 bytes of a RIFF file', whole.slice(0, 11), 'wav-header-cut', '11 bytes'],
  ['12 bytes of a RIFF file', whole.slice(0, 12), 'wav-header-cut', '12 bytes'],
  ['cut within the format chunk', whole.slice(0, 30), 'wav-header-cut', '30 bytes'],
  ['cut within the header of the data', whole.slice(0, 41), 'wav-header-cut', '41 bytes'],
  ['a chunk that claims more than the file', riff(fmt(), chunk('junk', [1, 2], 5000)), 'wav-header-cut', 'cut off'],
  ['noise', Uint8Array.from([0x93, 0x01, 0x00, 0x42, 0xff, 0, 1, 2, 3, 4, 5, 6, 7]), 'wav-not-riff', 'no RIFF'],
  [
    'a FLAC file by name',
    Uint8Array.from([...text('fLaC'), 0, 0, 0, 34, ...Array(40).fill(0)]),
    'wav-not-riff',
    'no RIFF',
  ],
  ['RIFF of another kind', start('RIFF', 'AVI '), 'wav-not-wave', 'no WAVE'],
  ['RF64', start('RF64'), 'wav-rf64', 'RF64'],
  ['BW64', start('BW64'), 'wav-rf64', 'BW64'],
  ['big-endian RIFX', start('RIFX'), 'wav-rifx', 'RIFX'],
  ['no format chunk', riff(chunk('junk', [1, 2, 3, 4]), data), 'wav-no-format', 'no format'],
  ['neither format nor data', riff(chunk('junk', [1, 2, 3, 4])), 'wav-no-format', 'no format'],
  ['data before format', riff(data, fmt()), 'wav-data-before-format', 'before its format'],
  ['a format chunk of 14 bytes', riff(chunk('fmt ', formatBody().slice(0, 14)), data), 'wav-format-short', '14 bytes'],
  ['an empty format chunk', riff(chunk('fmt ', []), data), 'wav-format-short', '0 bytes'],
  [
    'an extensible format of 18 bytes',
    riff(chunk('fmt ', extensibleBody(1).slice(0, 18)), data),
    'wav-extensible-short',
    '18 bytes',
  ],
  [
    'a strange sub-format',
    riff(chunk('fmt ', extensibleBody(1, {}, 16, [...GUID_TAIL.slice(0, 13), 0])), data),
    'wav-subformat',
    'sub-format',
  ],
  [
    'more valid bits than bits',
    riff(chunk('fmt ', extensibleBody(1, {}, 24)), data),
    'wav-valid-bits',
    '24 valid bits in 16',
  ],
  ['no data chunk', riff(fmt()), 'wav-no-data', 'no data'],
  ['no data chunk but a list', riff(fmt(), chunk('LIST', text('INFO'))), 'wav-no-data', 'no data'],
  ['an empty data chunk at the end', riff(fmt(), chunk('data', [])), 'clip-no-samples', 'no sound'],
  [
    'an empty data chunk with a list after it',
    riff(fmt(), chunk('data', []), chunk('LIST', text('INFO'))),
    'clip-no-samples',
    'no sound',
  ],
  ['less than one sample', riff(fmt(), chunk('data', [1])), 'clip-no-samples', 'no sound'],
  ['0 channels', plainWav({ channels: 0, block: 2 }, [1, 0]), 'clip-no-channels', '0 channels'],
  ['6 channels', plainWav({ channels: 6 }, Array(12).fill(0)), 'clip-channels', '6 channels'],
  ['65 535 channels', plainWav({ channels: 65_535, block: 2 }, [0, 0]), 'clip-channels', '65535 channels'],
  ['rate 0', plainWav({ rate: 0 }, [0, 0]), 'clip-rate-zero', 'rate of 0'],
  ['rate 7999', plainWav({ rate: 7_999 }, [0, 0]), 'clip-rate-range', '7999 Hz'],
  ['rate 192 001', plainWav({ rate: 192_001 }, [0, 0]), 'clip-rate-range', '192001 Hz'],
  ['A-law', plainWav({ tag: 6, bits: 8 }, [0, 0]), 'wav-encoding', 'A-law'],
  ['mu-law', plainWav({ tag: 7, bits: 8 }, [0, 0]), 'wav-encoding', 'mu-law'],
  ['Microsoft ADPCM', plainWav({ tag: 2, bits: 4, block: 256 }, [0, 0]), 'wav-encoding', 'Microsoft ADPCM'],
  ['IMA ADPCM', plainWav({ tag: 0x11, bits: 4, block: 256 }, [0, 0]), 'wav-encoding', 'IMA ADPCM'],
  ['MP3 in WAV', plainWav({ tag: 0x55, bits: 0, block: 1 }, [0, 0]), 'wav-encoding', 'MP3'],
  ['an encoding without a name', plainWav({ tag: 0x1234 }, [0, 0]), 'wav-encoding', '0x1234'],
  [
    'A-law behind an extensible format',
    riff(chunk('fmt ', extensibleBody(6, { bits: 8 })), data),
    'wav-encoding',
    'A-law',
  ],
  ['12 bits', plainWav({ bits: 12, block: 2 }, [0, 0]), 'wav-bits', '12-bit integer'],
  ['0 bits', plainWav({ bits: 0, block: 2 }, [0, 0]), 'wav-bits', '0-bit integer'],
  ['64-bit integers', plainWav({ bits: 64 }, Array(8).fill(0)), 'wav-bits', '64-bit integer'],
  ['16-bit floats', plainWav({ tag: 3, bits: 16 }, [0, 0]), 'wav-bits', '16-bit float'],
  ['a block of the wrong size', plainWav({ block: 4 }, [0, 0, 0, 0]), 'wav-block-size', 'block of 4 bytes'],
  ['a block of 0 bytes', plainWav({ block: 0 }, [0, 0]), 'wav-block-size', 'block of 0 bytes'],
];

describe('every bad file is named for what is wrong with it', () => {
  it.each(CASES)('%s', (_, file, code, got) => {
    let thrown: unknown;
    try {
      readWav(file, 'clips/old set.wav');
    } catch (error) {
      thrown = error;
    }
    expect(thrown).toBeInstanceOf(InputError);
    const faults = (thrown as InputError).faults;
    expect(faults).toHaveLength(1);
    expect(faults[0]).toMatchObject({ code, where: 'clips/old set.wav', got: expect.stringContaining(got) });
    expect(faults[0]!.expected).not.toBe('');
  });

  it('the cases cover every code the reader has', () => {
    expect([...new Set(CASES.map(([, , code]) => code))].sort()).toEqual(
      [
        'clip-channels',
        'clip-empty',
        'clip-no-channels',
        'clip-no-samples',
        'clip-rate-range',
        'clip-rate-zero',
        'clip-text',
        'wav-bits',
        'wav-block-size',
        'wav-data-before-format',
        'wav-encoding',
        'wav-extensible-short',
        'wav-format-short',
        'wav-header-cut',
        'wav-no-data',
        'wav-no-format',
        'wav-not-riff',
        'wav-not-wave',
        'wav-rf64',
        'wav-rifx',
        'wav-subformat',
        'wav-valid-bits',
      ].sort(),
    );
  });

  it('the file from which they are cut is itself in order', () => {
    expect(readWav(whole, 'clip.wav').frames).toBe(2);
  });
});
