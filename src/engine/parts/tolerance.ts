import { type Fault, InputError } from '../errors.ts';
import { formatQuantity } from './format-quantity.ts';
import { readQuantity } from './quantities.ts';

/** How far a part may lie from its nominal value. */
export interface Tolerance {
  /** Factors on the nominal value, `least` <= 1 <= `most`, both above 0. Both 1: the part does not vary. */
  readonly least: number;
  readonly most: number;
  /** Every value between them alike, or every ratio: for what is known by its order of magnitude only. */
  readonly evenIn: 'value' | 'ratio';
}

/** A part that does not vary. */
export const EXACT: Tolerance = { least: 1, most: 1, evenIn: 'value' };

export function withinFractions(below: number, above: number): Tolerance {
  return { least: 1 - below, most: 1 + above, evenIn: 'value' };
}

export function withinFactor(factor: number): Tolerance {
  return { least: 1 / factor, most: factor, evenIn: 'ratio' };
}

const NUMBER = '\\d*[.,]?\\d+';
const SIGNED = `[-\u2212\u2013]\\s*(${NUMBER})\\s*(?:%\\s*)?\\/\\s*\\+\\s*(${NUMBER})`;
const SIGNED_UP_FIRST = `\\+\\s*(${NUMBER})\\s*(?:%\\s*)?\\/\\s*[-\u2212\u2013]\\s*(${NUMBER})`;
const PERCENT = '\\s*(?:%|percent)';
const BOTH_WAYS = new RegExp(`^(.*?)\\s*(?:±|\\+\\s*\\/?\\s*[-\u2212\u2013])\\s*(${NUMBER})${PERCENT}\\s*$`, 'is');
const EACH_WAY = new RegExp(`^(.*?)\\s*${SIGNED}${PERCENT}\\s*$`, 'is');
const EACH_WAY_UP_FIRST = new RegExp(`^(.*?)\\s*${SIGNED_UP_FIRST}${PERCENT}\\s*$`, 'is');
const BY_A_FACTOR = new RegExp(`^(.*?)\\s*(?:[×x*]\\s*\\/\\s*÷?|[×x*]\\s*÷)\\s*(${NUMBER})\\s*$`, 'is');
/** What no value without a tolerance has in it. */
const MARKS = /[±÷×*%]|percent|\+\s*\/?\s*[-\u2212\u2013]|[-+\u2212\u2013]\s*\d+\s*\/\s*[-+\u2212\u2013]/i;
/** No value with its tolerance is as long, characters. */
const LONGEST = 100;

/** What a fault says is expected of a tolerance. */
export const TOLERANCE_EXPECTED =
  'a value with a tolerance such as 100 pF ±20 %, 220 kΩ -10/+30 % or 10 µA ×/÷ 3 (±20 % may be written +-20 %)';

/** Farthest down, up and by a factor: beyond them it is another part. */
const MOST_BELOW = 0.95;
const MOST_ABOVE = 9;
const MOST_FACTOR = 100;

export type ToleranceReading =
  | { readonly value: string; readonly written: string; readonly tolerance: Tolerance | null }
  | { readonly fault: Fault };

/**
 * Splits what is written of a part into its value and the tolerance behind it: `100 pF ±20 %`, `100p +-20%`,
 * `220 kΩ -10/+30 %`, `10 µA ×/÷ 3`. Text without a tolerance comes back as it is.
 *
 * @returns the value's text, the tolerance as written and as read (null: none), or a fault without its place:
 *   `bad-tolerance`, `tolerance-too-wide`
 */
export function splitTolerance(text: string): ToleranceReading {
  if (text.length > LONGEST) return { value: text, written: '', tolerance: null };
  const both = BOTH_WAYS.exec(text);
  const each = EACH_WAY.exec(text);
  const upFirst = EACH_WAY_UP_FIRST.exec(text);
  const factor = BY_A_FACTOR.exec(text);
  const found = each ?? upFirst ?? both ?? factor;
  if (!found) {
    return MARKS.test(text) ? { fault: bad(text) } : { value: text, written: '', tolerance: null };
  }
  const value = (found[1] as string).trim();
  if (value === '' || MARKS.test(value)) return { fault: bad(text) };
  const written = text.slice((found[1] as string).length).trim();
  try {
    if (found === factor) {
      const times = shareOf(found[2] as string, 'number', 1, MOST_FACTOR, text);
      return { value, written, tolerance: withinFactor(times) };
    }
    const [first, second] = [found[2] as string, (found[3] ?? found[2]) as string];
    const [down, up] = found === upFirst ? [second, first] : [first, second];
    const below = shareOf(down, 'fraction', 0, MOST_BELOW, text);
    const above = shareOf(up, 'fraction', 0, MOST_ABOVE, text);
    return { value, written, tolerance: withinFractions(below, above) };
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    return { fault: error.faults[0] as Fault };
  }
}

function shareOf(digits: string, kind: 'fraction' | 'number', least: number, most: number, got: string): number {
  const reading = readQuantity(kind === 'fraction' ? `${digits} %` : digits, kind, '');
  if ('fault' in reading) throw new InputError(bad(got));
  if (reading.value >= least && reading.value <= most) return reading.value;
  const expected = `at most -${formatQuantity(MOST_BELOW, 'fraction')}, +${formatQuantity(MOST_ABOVE, 'fraction')}, or ×/÷ 1 to ×/÷ ${MOST_FACTOR}`;
  throw new InputError({ code: 'tolerance-too-wide', where: '', got, expected });
}

function bad(got: string): Fault {
  return { code: 'bad-tolerance', where: '', got, expected: TOLERANCE_EXPECTED };
}

/** A tolerance as it is written on a part: `±10 %`, `-10/+30 %`, `×/÷ 3`. */
export function toleranceText({ least, most, evenIn }: Tolerance): string {
  const shown = (value: number): string => String(Number(value.toPrecision(4)));
  if (evenIn === 'ratio') return `×/÷ ${shown(most)}`;
  const [below, above] = [shown(100 * (1 - least)), shown(100 * (most - 1))];
  return below === above ? `±${below} %` : `-${below}/+${above} %`;
}
