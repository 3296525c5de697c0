import fc from 'fast-check';
import { expect } from 'vitest';
import { InputError } from '../../src/engine/errors.ts';
import { formatQuantity, letterCode, type QuantityKind } from '../../src/engine/parts/format-quantity.ts';
import { readQuantity } from '../../src/engine/parts/quantities.ts';
import { measuredCurve } from '../../src/results/measured-curve.ts';
import { readTwoColumns } from '../../src/results/two-columns.ts';

const KINDS: readonly QuantityKind[] = [
  ...(['resistance', 'capacitance', 'inductance', 'voltage', 'current', 'power', 'frequency'] as const),
  ...(['time', 'fraction', 'ratio', 'number'] as const),
];
const kind = fc.constantFrom(...KINDS);
const PIECES = [
  ...['2M2', '4k7', 'R47', '100p', '0.1 µF', '1:3', '80 %', '-6 dB', 'meg', 'mmf', 'Ω', 'ohm', 'µ', 'μ', 'e', 'E'],
  ...['.', ',', '-', '+', '−', ' ', '\u00a0', '0', '00', '9'.repeat(400), '1e308', '1e-400', 'e999', 'Infinity', 'NaN'],
  ...['0x10', '1_000', '١', 'ⅷ', '\u202e', '\ud800', 'K', 'k', 'M', 'm', 'T', 'G', 'V', 'Hz', '%'],
];
const written = fc.oneof(
  fc.array(fc.constantFrom(...PIECES), { minLength: 1, maxLength: 5 }).map((parts) => parts.join('')),
  fc.string({ unit: 'binary', maxLength: 12 }),
  fc.double().map(String),
);

/** Values read from any text are finite or refused, and what is formatted reads back. */
export function writtenValues(numRuns: number, seed: number): { read: number; refused: number } {
  const seen = { read: 0, refused: 0 };
  fc.assert(
    fc.property(written, kind, (text, of) => {
      const reading = readQuantity(text, of, 'here');
      if ('fault' in reading) {
        seen.refused++;
        expect(reading.fault.expected).not.toMatch(/NaN|undefined/);
        return;
      }
      seen.read++;
      expect(Number.isFinite(reading.value)).toBe(true);
    }),
    { numRuns, seed },
  );
  return seen;
}

/** Values that the trade writes, by kind: beyond them prefixes are written that no list takes, such as pΩ. */
const WRITABLE: readonly (readonly [QuantityKind, number, number])[] = [
  ['resistance', 1e-3, 1e12],
  ['capacitance', 1e-12, 0.9],
  ['inductance', 1e-9, 900],
  ['voltage', 1e-6, 1e5],
  ['current', 1e-12, 900],
  ['power', 1e-6, 1e5],
  ['frequency', 1, 1e9],
  ['fraction', 1e-4, 10],
  ['ratio', 1e-3, 100],
  ['number', 1e-6, 1e9],
];
const writable = fc
  .tuple(fc.constantFrom(...WRITABLE), fc.double({ min: 0, max: 1, noNaN: true }))
  .map(([[of, least, most], share]) => [of, least * (most / least) ** share] as const);

/** What is written out reads back as the same number, to the digits written. */
export function roundTrips(numRuns: number, seed: number): void {
  fc.assert(
    fc.property(writable, ([of, value]) => {
      const back = readQuantity(formatQuantity(value, of, 9), of, 'here');
      // half a unit of the ninth digit
      expect('value' in back && Math.abs(back.value / value - 1) < 5e-9, formatQuantity(value, of, 9)).toBe(true);
      if (of !== 'resistance' && of !== 'capacitance' && of !== 'inductance') return;
      const code = letterCode(value, of, 3);
      const coded = readQuantity(code, of, 'here');
      // half a unit of the third digit
      expect('value' in coded && Math.abs(coded.value / value - 1) < 5.1e-3, code).toBe(true);
    }),
    { numRuns, seed },
  );
}

const cell = fc.oneof(
  { weight: 6, arbitrary: fc.integer({ min: 1, max: 20_000 }).map(String) },
  { weight: 3, arbitrary: fc.double({ min: -60, max: 20, noNaN: true }).map((value) => value.toFixed(2)) },
  { weight: 1, arbitrary: fc.constantFrom(...PIECES, 'dB', 'V', 'Hz', '#', '"', '1,5', '1e400', '-1e-320', '0') },
  { weight: 1, arbitrary: fc.string({ unit: 'binary', maxLength: 5 }) },
);
const separator = fc.constantFrom(',', ';', '\t', ' ', ', ', '  ');
const lineEnd = fc.constantFrom('\n', '\r\n', '\r');

/** Tables as measuring programs and people leave them: rising frequencies for the most part, and anything between. */
const table = fc
  .record({
    heading: fc.constantFrom('', 'Hz,dB', 'f;V', '# sweep', '\ufeffFrequency (Hz)\tOutput (V)', '"Hz","volts"'),
    rows: fc.array(fc.array(cell, { minLength: 1, maxLength: 3 }), { maxLength: 12 }),
    rising: fc.boolean(),
    spoilt: fc.nat(20),
    separator,
    lineEnd,
  })
  .map(({ heading, rows, rising, spoilt, separator: between, lineEnd: end }) => {
    const lines = rows.map((row, k) =>
      (rising ? [String(50 * 2 ** k), k === spoilt ? row[0] : String(-k)] : row).join(between),
    );
    return [heading, ...lines].join(end);
  });

/** Tables read with finite rising rows, or refused by line. */
export function twoColumnTables(numRuns: number, seed: number): { read: number; refused: number } {
  const seen = { read: 0, refused: 0 };
  fc.assert(
    fc.property(fc.oneof({ weight: 9, arbitrary: table }, fc.string({ unit: 'binary' })), (text) => {
      try {
        const { hertz, values, unit } = readTwoColumns(text, 'sweep.csv');
        expect(hertz.length).toBe(values.length);
        expect([...hertz, ...values].every(Number.isFinite)).toBe(true);
        expect(hertz.every((value, k) => value > (k === 0 ? 0 : (hertz[k - 1] as number)))).toBe(true);
        seen.read++;
        const { decibels } = measuredCurve({ hertz, values, unit }, 'sweep.csv');
        expect(decibels.every(Number.isFinite)).toBe(true);
      } catch (error) {
        if (!(error instanceof InputError)) throw error;
        expect(error.faults.length).toBeGreaterThan(0);
        seen.refused++;
      }
    }),
    { numRuns, seed },
  );
  return seen;
}
