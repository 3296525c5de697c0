import * as z from 'zod';
import type { Fault } from '../engine/errors.ts';
import type { QuantityKind } from '../engine/parts/format-quantity.ts';
import { type QuantityRange, rangeText, readQuantity } from '../engine/parts/quantities.ts';
import { unitDescription } from '../engine/parts/units.ts';
import { readTransconductance, SLOPE_EXPECTED } from './transconductance.ts';
import { plainName, plainWords } from './words.ts';

/** Which quantity a field holds and between which limits, so that a value can be chosen. Filled where fields are defined. */
export const quantityKinds = z.registry<{ kind: QuantityKind; limits: QuantityLimits }>();

export type Written = string | number;
export type Reading<T> = { readonly value: T } | { readonly fault: Fault };

/** A field that is read from text: its faults travel in the issue, so that the place can be added later. */
export function readField<T>(
  read: (written: Written) => Reading<T>,
  expected: string,
  what: string,
): z.ZodType<T, Written> {
  return z
    .union([z.string(), z.number()], { error: () => expected })
    .transform((written, context): T => {
      const reading = read(written);
      if ('value' in reading) return reading.value;
      context.addIssue({ code: 'custom', message: reading.fault.code, params: { fault: reading.fault } });
      return z.NEVER;
    })
    .meta({ description: what });
}

export interface QuantityLimits extends QuantityRange {
  /** Whether 0 is allowed besides the range. */
  readonly orZero?: boolean;
}

/** A quantity within limits, base SI units. */
export function quantity(kind: QuantityKind, limits: QuantityLimits, what: string): z.ZodType<number, Written> {
  const field = readField(
    (written) => readWithin(written, kind, limits),
    expectedOf(kind),
    `${what}; ${limitsText(kind, limits)}`,
  );
  return field.register(quantityKinds, { kind, limits });
}

/** A quantity with its default as written; the default goes through the same reading. */
export function quantityOr(
  standard: string,
  kind: QuantityKind,
  limits: QuantityLimits,
  what: string,
): z.ZodType<number, Written | undefined> {
  return quantity(kind, limits, what).prefault(standard).register(quantityKinds, { kind, limits });
}

/** A quantity or the word `none`, which gives null; left out, it is undefined. */
export function quantityOrNull(
  kind: QuantityKind,
  limits: QuantityLimits,
  what: string,
): z.ZodType<number | null, Written> {
  const field = readField<number | null>(
    (written) => {
      if (/^\s*none\s*$/i.test(String(written))) return { value: null };
      const reading = readWithin(written, kind, limits);
      if ('value' in reading) return reading;
      return { fault: { ...reading.fault, expected: `${reading.fault.expected}, or none` } };
    },
    `${expectedOf(kind)}, or none`,
    `${what}; ${limitsText(kind, limits)}, or none`,
  );
  return field.register(quantityKinds, { kind, limits });
}

/** The same with its default as written. */
export function quantityOrNone(
  standard: string,
  kind: QuantityKind,
  limits: QuantityLimits,
  what: string,
): z.ZodType<number | null, Written | undefined> {
  return quantityOrNull(kind, limits, what).prefault(standard).register(quantityKinds, { kind, limits });
}

/** One of a few words; `also` maps other spellings to them. */
export function choice<const T extends string>(
  words: readonly [T, ...T[]],
  what: string,
  also: Readonly<Record<string, T>> = {},
  remark = '',
): z.ZodType<T, unknown> {
  const read = (written: unknown): unknown => {
    if (typeof written !== 'string') return written;
    const plain = plainWords(written);
    return words.find((word) => word.toLowerCase() === plain.toLowerCase()) ?? also[plain.toLowerCase()] ?? plain;
  };
  return z
    .preprocess(read, z.enum(words, { error: () => listed(words) + remark }).meta({ description: what }))
    .meta({ description: what });
}

/** One of a few words, with its default. */
export function choiceOr<const T extends string>(
  words: readonly [T, ...T[]],
  standard: T,
  what: string,
  also: Readonly<Record<string, T>> = {},
  remark = '',
): z.ZodType<T, unknown> {
  return choice(words, what, also, remark).prefault(standard);
}

/** Plain text, trimmed, of 1 to `longest` characters. */
export function words(longest: number, what: string, expected: string): z.ZodType<string, Written> {
  return readField(
    (written) => {
      const text = plainName(String(written));
      if (text.length >= 1 && text.length <= longest) return { value: text };
      return { fault: { code: text ? 'too-long' : 'no-value', where: '', got: text || 'nothing', expected } };
    },
    expected,
    what,
  );
}

/** A transconductance in siemens. */
export function transconductance(what: string): z.ZodType<number, Written> {
  return readField(readTransconductance, SLOPE_EXPECTED, what);
}

/** Words in a row as a sentence has them: `a, b or c`. */
export function listed(names: readonly string[]): string {
  return names.length < 2 ? (names[0] ?? '') : `${names.slice(0, -1).join(', ')} or ${names.at(-1)}`;
}

function expectedOf(kind: QuantityKind): string {
  const { noun, examples } = unitDescription(kind);
  return `${noun} such as ${examples}`;
}

function limitsText(kind: QuantityKind, limits: QuantityLimits): string {
  return (limits.orZero ? '0, or ' : '') + rangeText(limits, kind);
}

function readWithin(written: Written, kind: QuantityKind, limits: QuantityLimits): Reading<number> {
  const reading = readQuantity(written, kind, '', limits);
  if ('value' in reading || !limits.orZero || reading.fault.code !== 'out-of-range') return reading;
  const anything = readQuantity(written, kind, '');
  if ('value' in anything && anything.value === 0) return anything;
  return { fault: { ...reading.fault, expected: limitsText(kind, limits) } };
}

const LENGTH_EXPECTED = 'a length such as 50 mm, 5 cm, 2 in';

/** A length in metres, 1 mm to 1 m; a plain number is in metres. */
export function length(what: string): z.ZodType<number, Written> {
  return readField(
    (written): Reading<number> => {
      const match = /^\s*([\d.]+)\s*(mm|cm|m|in|inch|inches|")?\s*$/i.exec(String(written));
      const perUnit: Readonly<Record<string, number>> = {
        mm: 1e-3,
        cm: 1e-2,
        m: 1,
        in: 0.0254,
        inch: 0.0254,
        inches: 0.0254,
        '"': 0.0254,
      };
      const value = Number(match?.[1]) * (perUnit[(match?.[2] ?? 'm').toLowerCase()] ?? Number.NaN);
      if (value >= 1e-3 && value <= 1) return { value };
      const code = match ? 'out-of-range' : 'not-a-quantity';
      return { fault: { code, where: '', got: String(written), expected: match ? '1 mm to 1 m' : LENGTH_EXPECTED } };
    },
    LENGTH_EXPECTED,
    what,
  );
}
