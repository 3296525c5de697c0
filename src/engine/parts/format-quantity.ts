/** What a number on a parts list stands for. */
export type QuantityKind =
  | 'resistance'
  | 'capacitance'
  | 'inductance'
  | 'voltage'
  | 'current'
  | 'power'
  | 'frequency'
  | 'time'
  | 'fraction'
  | 'ratio'
  | 'number';

/** Unit symbol of each kind that takes SI prefixes. */
export const UNIT_SYMBOL: Readonly<Partial<Record<QuantityKind, string>>> = {
  resistance: 'Ω',
  capacitance: 'F',
  inductance: 'H',
  voltage: 'V',
  current: 'A',
  power: 'W',
  frequency: 'Hz',
  time: 's',
};

const PREFIX_OF_EXPONENT: Readonly<Record<number, string>> = {
  [-15]: 'f',
  [-12]: 'p',
  [-9]: 'n',
  [-6]: 'µ',
  [-3]: 'm',
  0: '',
  3: 'k',
  6: 'M',
  9: 'G',
  12: 'T',
};

/** A number as decimal digits, sign and the exponent of an engineering prefix; digits have 1 to 3 places before the point. */
export interface EngineeringNumber {
  readonly sign: string;
  readonly whole: string;
  readonly decimals: string;
  readonly exponent: number;
}

/**
 * Splits a finite number for an engineering prefix, rounded to `significantDigits` (1 to 15). The digits are moved as
 * text, so 4.7e-8 gives exactly 47 with exponent −9. Exponents are held to −15..12, where the prefixes end.
 */
export function engineeringNumber(value: number, significantDigits: number): EngineeringNumber {
  const [mantissa, power] = Math.abs(value)
    .toExponential(significantDigits - 1)
    .split('e') as [string, string];
  const decade = value === 0 ? 0 : Number(power);
  const exponent = Math.max(-15, Math.min(12, 3 * Math.floor(decade / 3)));
  const digits = mantissa.replace('.', '');
  const places = decade - exponent + 1;
  const padded = places <= 0 ? '0'.repeat(1 - places) + digits : digits.padEnd(places, '0');
  const point = Math.max(1, places);
  return {
    sign: value < 0 ? '-' : '',
    whole: padded.slice(0, point),
    decimals: padded.slice(point).replace(/0+$/, ''),
    exponent,
  };
}

/**
 * A quantity as it is written on a drawing: `150 pF`, `2.2 MΩ`, `920 kHz`, `60 mV`, `80 %`, `1:3`.
 *
 * @param value  base SI units, finite
 * @param significantDigits  1 to 15; trailing zeros are dropped
 */
export function formatQuantity(value: number, kind: QuantityKind, significantDigits = 4): string {
  if (!Number.isFinite(value)) return String(value);
  if (kind === 'fraction') return `${plain(value * 100, significantDigits)} %`;
  if (kind === 'ratio') return `1:${plain(value, significantDigits)}`;
  if (kind === 'number') return plain(value, significantDigits);
  const { sign, whole, decimals, exponent } = engineeringNumber(value, significantDigits);
  const number = sign + whole + (decimals === '' ? '' : `.${decimals}`);
  return `${number} ${PREFIX_OF_EXPONENT[exponent] ?? ''}${UNIT_SYMBOL[kind] ?? ''}`;
}

function plain(value: number, significantDigits: number): string {
  return String(Number(value.toPrecision(significantDigits)));
}

/** The letter that stands for the decimal point where the exponent has no prefix. */
const POINT_LETTER: Readonly<Partial<Record<QuantityKind, string>>> = {
  resistance: 'R',
  capacitance: 'F',
  inductance: 'H',
  voltage: 'V',
  current: 'A',
};

/**
 * The IEC 60062 letter code of a part's value: `4k7`, `2M2`, `470R`, `R47`, `150p`, `4µ7`, `2n2`.
 *
 * @param value  base SI units, above 0
 * @param kind   resistance, capacitance or inductance (the last by the same rule, common practice, no source)
 */
export function letterCode(
  value: number,
  kind: 'resistance' | 'capacitance' | 'inductance',
  significantDigits = 3,
): string {
  const { sign, whole, decimals, exponent } = engineeringNumber(value, significantDigits);
  // below one ohm the code keeps R as its point (R47), not a milliohm
  if (kind === 'resistance' && exponent < 0) {
    const text = String(Number(Math.abs(value).toPrecision(significantDigits)));
    if (/^0\.\d+$/.test(text)) return `${sign}R${text.slice(2)}`;
  }
  const letter = exponent === 0 ? (POINT_LETTER[kind] ?? '') : (PREFIX_OF_EXPONENT[exponent] ?? '');
  return sign + whole + letter + decimals;
}
