/** A number as it was written, taken apart but not yet worth anything: the unit decides what its suffix means. */
export interface WrittenNumber {
  /** Decimal digits with sign, fit for `Number`, such as `-2.2`. */
  readonly digits: string;
  /** Power of ten written with an `e`, 0 without one. */
  readonly power: number;
  /** Prefix and unit without spaces, `µ` as `u` and `Ω` as `ohm`; for `2M2` it is `M`. */
  readonly suffix: string;
}

/** Why a text is no number: nothing to read, or a comma that may be a decimal point or a group of thousands. */
export type NotWritten = 'no-number' | 'ambiguous-comma';

const PLAIN = /^([+-]?(?:\d+\.?\d*|\.\d+))(?:[eE]([+-]?\d+))?(.*)$/;
const LETTER_AS_POINT = /^([+-]?)(\d*)(meg|[A-DF-Za-df-z])(\d+)(.*)$/i;

/**
 * Takes apart what is written on a part or a drawing: letter codes of IEC 60062, where the letter stands at the decimal
 * point (`2M2`, `4k7`, `R47`, `1u5`), and plain numbers with a prefix and a unit (`0.1 µF`, `455kHz`, `1e6`).
 *
 * Both code points of µ and of Ω are read, a minus of typography too, and a decimal comma where it cannot be a thousands
 * group: one comma, and not exactly three digits after it unless the number begins with 0.
 */
export function readWritten(text: string): WrittenNumber | NotWritten {
  const plain = text
    .replace(/[\u00b5\u03bc]/g, 'u')
    .replace(/[\u2126\u03a9]/g, 'ohm')
    .replace(/\u2212/g, '-')
    .replace(/[\s\u00a0\u2009\u202f]+/g, ' ')
    .trim();
  // a space inside the digits is a group of thousands or two numbers: neither is ours
  if (/\d \d/.test(plain)) return 'no-number';
  const pointed = decimalPoint(plain.replace(/ /g, ''));
  if (pointed === null) return 'ambiguous-comma';
  const coded = LETTER_AS_POINT.exec(pointed);
  if (coded) {
    const [, sign, whole, letter, decimals, rest] = coded as unknown as [
      string,
      string,
      string,
      string,
      string,
      string,
    ];
    return { digits: `${sign}${whole || '0'}.${decimals}`, power: 0, suffix: letter + rest };
  }
  const written = PLAIN.exec(pointed);
  if (!written) return 'no-number';
  const [, digits, power, suffix] = written as unknown as [string, string, string | undefined, string];
  return { digits, power: Number(power ?? 0), suffix };
}

/** The text with its decimal comma as a point; null when a comma may be a thousands group. */
function decimalPoint(text: string): string | null {
  if (!/\d,\d/.test(text)) return text;
  const match = /^([+-]?)(\d+),(\d+)(?![\d.,])(.*)$/.exec(text);
  if (!match || /[.,]/.test(match[4] ?? '')) return null;
  const [, sign, whole, decimals, rest] = match as unknown as [string, string, string, string, string];
  if (decimals.length === 3 && whole !== '0') return null;
  return `${sign}${whole}.${decimals}${rest}`;
}

/**
 * The value of a written number, base units, given the power of ten that its suffix stands for. The digits are read with
 * their exponent in one step, so `47n` is exactly 4.7e-8; a multiplication would leave 4.7000000000000004e-8.
 */
export function writtenValue(written: WrittenNumber, powerOfSuffix: number): number {
  return Number(`${written.digits}e${written.power + powerOfSuffix}`);
}
