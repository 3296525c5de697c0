import type { QuantityKind } from './format-quantity.ts';

/** How one kind of quantity is written: its unit, its prefixes, and what a fault says of them. */
interface UnitRule {
  /** Unit at the end of the suffix, in any case; the prefix is what stands before it. */
  readonly unit: RegExp;
  /** Prefix, case kept, to power of ten. A prefix that is not here is refused. */
  readonly prefixes: Readonly<Record<string, number>>;
  readonly noun: string;
  readonly units: string;
  readonly examples: string;
}

const MICRO_AND_BELOW = { '': 0, m: -3, u: -6, n: -9, p: -12 } as const;
const KILO_AND_ABOVE = { '': 0, k: 3, K: 3, M: 6, G: 9 } as const;

const RULES: Readonly<Record<Exclude<QuantityKind, 'ratio'>, UnitRule>> = {
  resistance: {
    unit: /(ohms?)?$/i,
    prefixes: { ...KILO_AND_ABOVE, R: 0, m: -3, T: 12, meg: 6, Meg: 6, MEG: 6, kil: 3, Kil: 3 },
    noun: 'a resistance',
    units: 'Ω or ohm, with m, k, M, G',
    examples: '47k, 4k7, 2.2 MΩ',
  },
  capacitance: {
    unit: /(f|farads?|fd)?$/i,
    prefixes: { ...MICRO_AND_BELOW, P: -12, N: -9, U: -6, uu: -12, UU: -12, mm: -12, MM: -12 },
    noun: 'a capacitance',
    units: 'F, with p, n, µ, m; of old markings mfd (µF) and mmf, mmfd, µµF (pF)',
    examples: '100p, 2n2, 0.1 µF',
  },
  inductance: {
    unit: /(h|hy|henrys?|henries)?$/i,
    prefixes: { ...MICRO_AND_BELOW, U: -6 },
    noun: 'an inductance',
    units: 'H, with m, µ, n',
    examples: '200 µH, 2.5 mH, 30 H',
  },
  voltage: {
    unit: /(v|volts?)?$/i,
    prefixes: { ...MICRO_AND_BELOW, k: 3, K: 3 },
    noun: 'a voltage',
    units: 'V, with µ, m, k',
    examples: '45 V, 60 mV, 1.4',
  },
  current: {
    unit: /(a|amps?|amperes?)?$/i,
    prefixes: { ...MICRO_AND_BELOW },
    noun: 'a current',
    units: 'A, with p, n, µ, m',
    examples: '2.3 mA, 10 µA',
  },
  power: {
    unit: /(w|watts?)?$/i,
    prefixes: { ...MICRO_AND_BELOW, k: 3, K: 3 },
    noun: 'a power',
    units: 'W, with µ, m, k',
    examples: '1 W, 500 mW',
  },
  frequency: {
    unit: /(hz|hertz|c\/s|cs|c|cycles|cps)?$/i,
    prefixes: { ...KILO_AND_ABOVE },
    noun: 'a frequency',
    units: 'Hz or c, with k, M',
    examples: '920 kHz, 1M2, 455kHz',
  },
  time: {
    unit: /(s|secs?|seconds?)?$/i,
    prefixes: { ...MICRO_AND_BELOW },
    noun: 'a time',
    units: 's, with m, µ, n',
    examples: '5 ms, 0.2 s',
  },
  fraction: {
    unit: /(%|percent)?$/i,
    prefixes: { '': 0 },
    noun: 'a fraction',
    units: '% or none',
    examples: '80 %, 0.8',
  },
  number: {
    unit: /$/,
    prefixes: { '': 0 },
    noun: 'a number',
    units: 'no unit',
    examples: '40, 1.5, 1e3',
  },
};

/** What a fault says is expected of a kind: noun, units and examples. */
export function unitDescription(kind: QuantityKind): { noun: string; units: string; examples: string } {
  if (kind === 'ratio') return { noun: 'a turns ratio', units: '1:n or n', examples: '1:3, 3' };
  return RULES[kind];
}

export type SuffixReading =
  | { readonly power: number; readonly unit: string }
  /** The unit fits, its prefix could be read in two ways or is of the wrong size for this kind. */
  | { readonly doubt: string }
  | null;

/**
 * The power of ten of a suffix such as `k`, `kHz`, `pF`, `mfd` or `%` for a kind of quantity; null when it is no unit of it.
 */
export function readSuffix(suffix: string, kind: Exclude<QuantityKind, 'ratio'>): SuffixReading {
  const rule = RULES[kind];
  // a letter code may still carry its unit: 4R7 ohm
  const text = kind === 'resistance' ? suffix.replace(/^R(?=ohm)/i, '') : suffix;
  for (const unit of endings(text, rule.unit)) {
    const prefix = text.slice(0, text.length - unit.length);
    if (kind === 'fraction') return prefix === '' ? { power: unit === '' ? 0 : -2, unit } : null;
    if (kind === 'capacitance' && /^m$/i.test(prefix)) {
      const marking = oldMicrofarad(prefix + unit);
      if (marking) return marking;
    }
    const power = rule.prefixes[prefix];
    if (power !== undefined) return { power, unit };
    if (kind !== 'number' && (prefix === 'M' || prefix === 'm')) {
      return { doubt: prefix === 'M' ? 'M is mega; milli is m' : 'm is milli; mega is M' };
    }
  }
  return null;
}

/** The unit that ends the text, then no unit at all (`m` is a prefix, `V` a unit, `mV` both). */
function endings(text: string, unit: RegExp): string[] {
  const found = unit.exec(text)?.[0] ?? '';
  return found === '' ? [''] : [found, ''];
}

/**
 * Old capacitor markings with one m: `mfd` is microfarad in any case; `mF` is a millifarad; `mf` and `MF` have meant both.
 */
function oldMicrofarad(marking: string): SuffixReading {
  if (/^mfd$/i.test(marking)) return { power: -6, unit: 'fd' };
  return /^mf$/i.test(marking) && marking !== 'mF' ? { doubt: `${marking} has meant µF; write µF or mfd` } : null;
}
