import { type Fault, InputError } from '../errors.ts';
import { formatQuantity, type QuantityKind } from './format-quantity.ts';
import { readWritten, writtenValue } from './letter-codes.ts';
import { readSuffix, unitDescription } from './units.ts';

/** Limits of a quantity in base SI units; each is optional and none is assumed. */
export interface QuantityRange {
  /** Smallest value allowed. */
  readonly atLeast?: number;
  /** Every value must be greater than this. */
  readonly above?: number;
  /** Largest value allowed. */
  readonly atMost?: number;
}

export type QuantityReading = { readonly value: number } | { readonly fault: Fault };

const OTHER_KINDS = [
  'resistance',
  'capacitance',
  'inductance',
  'voltage',
  'current',
  'power',
  'frequency',
  'fraction',
] as const;

/**
 * Reads a quantity as it is written on the part or the drawing: `2 MΩ`, `2M2`, `100p`, `0.1 µF`, `45 V`, `80 %`. A plain number
 * is in base SI units; `m` and `M` differ, `K` is taken for kilo and `MEG` for mega.
 *
 * @param written  text, or a number in base SI units
 * @param where    key, flag or field, for the fault
 * @param range    limits in base SI units
 * @returns the value, finite and in range, or one fault: `not-a-quantity`, `ambiguous-comma`, `ambiguous-prefix`,
 *   `wrong-unit`, `out-of-range`
 */
export function readQuantity(
  written: string | number,
  kind: QuantityKind,
  where: string,
  range: QuantityRange = {},
): QuantityReading {
  const { noun, units, examples } = unitDescription(kind);
  const got = String(written);
  const fault = (code: string, expected: string, hint?: string): QuantityReading => ({
    fault: { code, where, got, expected, ...(hint === undefined ? {} : { hint }) },
  });
  const asExamples = `${noun} such as ${examples}`;
  const inRange = (value: number): QuantityReading => {
    if (!Number.isFinite(value)) return fault('not-a-quantity', asExamples);
    if (outside(value, range)) return fault('out-of-range', rangeText(range, kind));
    // a written -0 is zero
    return { value: value === 0 ? 0 : value };
  };
  if (typeof written === 'number') return inRange(written);
  const text = kind === 'ratio' ? turnsText(written) : written;
  if (text === null)
    return fault('ambiguous-ratio', '1:n, or n alone', 'write 1:3 for a step-up of three, 1:0.5 for a step-down');
  const number = readWritten(text);
  if (number === 'no-number') return fault('not-a-quantity', asExamples);
  if (number === 'ambiguous-comma') {
    return fault('ambiguous-comma', asExamples, 'write a decimal point, and no mark between thousands');
  }
  const unitKind = kind === 'ratio' ? 'number' : kind;
  const suffix = readSuffix(number.suffix, unitKind);
  if (suffix === null) {
    const other = OTHER_KINDS.find((k) => {
      const reading = k === kind ? null : readSuffix(number.suffix, k);
      return reading !== null && 'unit' in reading && reading.unit !== '';
    });
    return fault('wrong-unit', `${noun} in ${units}`, other ? `that is ${unitDescription(other).noun}` : undefined);
  }
  if ('doubt' in suffix) return fault('ambiguous-prefix', `${noun} in ${units}`, suffix.doubt);
  return inRange(writtenValue(number, suffix.power));
}

/** As `readQuantity`, but a fault is thrown: the value itself is returned. */
export function parseQuantity(
  written: string | number,
  kind: QuantityKind,
  where: string,
  range: QuantityRange = {},
): number {
  const reading = readQuantity(written, kind, where, range);
  if ('fault' in reading) throw new InputError(reading.fault);
  return reading.value;
}

/** The n of `1:n` as text; a ratio that does not begin with 1 is ambiguous, since the trade says 3:1 for a step-up. */
function turnsText(written: string): string | null {
  const ratio = /^\s*([\d.,]+)\s*:\s*(.*)$/.exec(written);
  if (!ratio) return written;
  return Number(ratio[1]) === 1 ? (ratio[2] ?? '') : null;
}

function outside(value: number, range: QuantityRange): boolean {
  return (
    (range.atLeast !== undefined && value < range.atLeast) ||
    (range.above !== undefined && value <= range.above) ||
    (range.atMost !== undefined && value > range.atMost)
  );
}

/** A range in words with units: `10 Ω to 100 MΩ`, `above 0 F`, `at most 1 V`. */
export function rangeText(range: QuantityRange, kind: QuantityKind): string {
  const show = (value: number): string => formatQuantity(value, kind);
  const { atLeast, above, atMost } = range;
  if (atLeast !== undefined && atMost !== undefined) return `${show(atLeast)} to ${show(atMost)}`;
  if (above !== undefined && atMost !== undefined) return `above ${show(above)}, at most ${show(atMost)}`;
  if (atLeast !== undefined) return `${show(atLeast)} or more`;
  if (above !== undefined) return `above ${show(above)}`;
  return atMost === undefined ? 'any value' : `at most ${show(atMost)}`;
}
