import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { safeFileNames } from '../../src/results/safe-names.ts';

const one = (name: string): string => safeFileNames([name])[0]!;
const bytes = (name: string): number => new TextEncoder().encode(name).length;

describe('a stem keeps what every file system takes', () => {
  it.each([
    ['as found', 'as found'],
    ['100 pF, 2.2 MΩ', '100 pF, 2.2 MΩ'],
    ['leak 2M2 / 100 pF', 'leak 2M2 - 100 pF'],
    ['a\\b:c*d?e"f<g>h|i', 'a-b-c-d-e-f-g-h-i'],
    ['../../etc/passwd', '_..-..-etc-passwd'],
    ['.hidden', '_.hidden'],
    ['-rf', '_-rf'],
    ['~', '_~'],
    ['trailing. . .', 'trailing'],
    ['  spaces  inside ', 'spaces inside'],
    ['line\nbreak\tand\0nul', 'line break and nul'],
    ['turned \u202e txt', 'turned txt'],
    ['half \ud800 letter', 'half - letter'],
    ['', 'variant'],
    ['...', 'variant'],
    ['e\u0301tude', '\u00e9tude'],
  ])('%j becomes %j', (name, stem) => {
    expect(one(name)).toBe(stem);
  });

  it.each(['CON', 'con', 'PRN', 'Aux', 'NUL', 'COM1', 'com9', 'LPT1', 'lpt0', 'COM¹', 'CONIN$', 'con.wav', 'nul .x'])(
    'the device %s is no stem',
    (name) => {
      expect(one(name)).toBe(`_${name}`);
    },
  );

  it.each(['result', 'RESULT', 'response', 'Response.svg', 'listening', 'result.json'])(
    '%s would meet a file of the result folder',
    (name) => {
      expect(one(name)).toBe(`_${name}`);
    },
  );

  it('names that only look like those are left alone', () => {
    for (const name of ['console', 'COM10', 'responses', 'results 2', 'auxiliary']) expect(one(name)).toBe(name);
  });
});

describe('length', () => {
  it('is at most 80 bytes, cut between letters', () => {
    expect(one('x'.repeat(300))).toBe('x'.repeat(80));
    expect(one('Ω'.repeat(60))).toBe('Ω'.repeat(40));
    expect(one(`a${'日'.repeat(60)}`)).toBe(`a${'日'.repeat(26)}`);
    // q with two marks is one letter as read, 5 bytes: 16 whole ones
    expect(one('q\u0323\u0307'.repeat(40))).toBe('q\u0323\u0307'.repeat(16));
  });

  it('holds with a number behind', () => {
    const stems = safeFileNames(Array(12).fill('y'.repeat(200)));
    expect(stems[0]).toBe('y'.repeat(80));
    expect(stems[1]).toBe(`${'y'.repeat(76)} (2)`);
    expect(stems[11]).toBe(`${'y'.repeat(75)} (12)`);
  });

  it('one letter of a thousand marks is cut between code points', () => {
    expect(bytes(one(`q${'\u0323'.repeat(1000)}`))).toBeLessThanOrEqual(80);
  });
});

describe('no two stems meet', () => {
  it('whatever the case, the composition or the form', () => {
    expect(safeFileNames(['Bright', 'bright', 'BRIGHT'])).toEqual(['Bright', 'bright (2)', 'BRIGHT (3)']);
    expect(safeFileNames(['\u00e9', 'e\u0301'])).toEqual(['\u00e9', '\u00e9 (2)']);
    expect(safeFileNames(['stra\u00dfe', 'STRASSE'])).toEqual(['stra\u00dfe', 'STRASSE (2)']);
    expect(safeFileNames(['a/b', 'a\\b', 'a-b'])).toEqual(['a-b', 'a-b (2)', 'a-b (3)']);
    expect(safeFileNames(['a (2)', 'a', 'a', 'a (2)'])).toEqual(['a (2)', 'a', 'a (3)', 'a (2) (2)']);
  });

  it('any names: safe, short, different, and the same every time', () => {
    const nasty = fc.constantFrom(
      'a',
      'A',
      'CON',
      'é',
      'e\u0301',
      '.',
      ' ',
      '/',
      '(2)',
      'ß',
      'SS',
      '\u0000',
      '😀',
      '\u200d',
    );
    const name = fc.oneof(
      fc.string({ unit: 'binary', maxLength: 120 }),
      fc.array(nasty).map((parts) => parts.join('')),
    );
    fc.assert(
      fc.property(fc.array(name, { maxLength: 24 }), (names) => {
        const stems = safeFileNames(names);
        expect(stems).toHaveLength(names.length);
        for (const stem of stems) {
          expect(stem).toMatch(/^[^<>:"/\\|?*\p{Cc}\p{Cs}]+$/u);
          expect(stem).not.toMatch(/^[.\-~ ]|[. ]$/);
          expect(bytes(stem)).toBeLessThanOrEqual(80);
          expect(stem.normalize('NFC')).toBe(stem);
        }
        const onDisk = stems.map((stem) => stem.normalize('NFD').toUpperCase().toLowerCase().normalize('NFC'));
        expect(new Set(onDisk).size).toBe(stems.length);
        expect(safeFileNames(names)).toEqual(stems);
      }),
      { numRuns: 1000, seed: 20_263 },
    );
  });
});
