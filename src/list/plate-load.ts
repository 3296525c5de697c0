import * as z from 'zod';
import type { Fault } from '../engine/errors.ts';
import { quantity, quantityOrNull, type Written, words } from './fields.ts';

const OHMS = { atLeast: 1, atMost: 1e9 } as const;
const WINDING_OHMS = { atLeast: 0, atMost: 1e6 } as const;
const HENRIES = { atLeast: 1e-6, atMost: 1e5 } as const;
const FARADS_OR_NONE = { atLeast: 0.1e-12, atMost: 1e-6, orZero: true } as const;

const part = words(
  60,
  'Part of the catalogue whose values stand where none are written',
  'a name such as good 1:3',
).optional();
/** A value that may also be `none`; left out, the catalogue's part gives it. */
const orNone = (kind: 'resistance' | 'capacitance', what: string) =>
  quantityOrNull(kind, kind === 'resistance' ? OHMS : FARADS_OR_NONE, what).optional();

const resistor = z.strictObject({
  kind: z.literal('resistor'),
  resistance: quantity('resistance', OHMS, 'Resistance of the load').prefault('220 kΩ'),
});

const choke = z.strictObject({
  kind: z.literal('choke'),
  part,
  inductance: quantity('inductance', HENRIES, 'Inductance').optional(),
  'dc resistance': quantity('resistance', WINDING_OHMS, 'DC resistance of the winding').optional(),
  'core loss': orNone('resistance', 'Loss of the core, as a resistance across the choke'),
  'self capacitance': quantity('capacitance', FARADS_OR_NONE, 'Capacitance across the choke').optional(),
});

/** Values of a transformer, as an interstage load or a matching one. */
export const transformerKeys = {
  part,
  ratio: quantity('ratio', { atLeast: 1e-3, atMost: 100 }, 'Turns, primary to secondary').optional(),
  'primary inductance': quantity('inductance', HENRIES, 'Of the primary, without direct current').optional(),
  'at current': quantity(
    'current',
    { above: 0, atMost: 1 },
    'A direct current at which the inductance is known',
  ).optional(),
  'inductance at current': quantity('inductance', HENRIES, 'Of the primary at that current').optional(),
  'primary dc resistance': quantity('resistance', WINDING_OHMS, 'DC resistance of the primary').optional(),
  leakage: quantity('inductance', { atLeast: 0, atMost: 100 }, 'Leakage inductance, on the primary side').optional(),
  'core loss': orNone('resistance', 'Loss of the core, as a resistance across the primary'),
  'primary capacitance': quantity('capacitance', FARADS_OR_NONE, 'Across the primary').optional(),
  'secondary dc resistance': quantity('resistance', WINDING_OHMS, 'DC resistance of the secondary').optional(),
  'secondary capacitance': quantity('capacitance', FARADS_OR_NONE, 'Across the secondary').optional(),
};

const transformer = z.strictObject({ kind: z.literal('transformer'), ...transformerKeys });

const phones = z.strictObject({
  kind: z.literal('phones'),
  part,
  'dc resistance': quantity('resistance', WINDING_OHMS, 'DC resistance of the phones').optional(),
  inductance: quantity('inductance', HENRIES, 'Inductance').optional(),
  'eddy loss': orNone('resistance', 'Loss of the iron, as a resistance across the inductance'),
  'self capacitance': quantity('capacitance', FARADS_OR_NONE, 'Of winding and cord').optional(),
  'resonant frequency': quantity('frequency', { atLeast: 50, atMost: 10e3 }, 'Of the diaphragm').optional(),
  'resonance resistance': orNone('resistance', 'What the resonance adds to the impedance; none for no resonance'),
  'resonance Q': quantity('number', { atLeast: 0.1, atMost: 100 }, 'Sharpness of the resonance').optional(),
});

/** The value that stands behind each kind of load when it is written on one line. */
export const MAIN_VALUE: Readonly<Record<string, string>> = {
  resistor: 'resistance',
  choke: 'inductance',
  transformer: 'ratio',
  phones: 'dc resistance',
};
const KINDS = Object.keys(MAIN_VALUE);

/** What a fault says is expected of a load. */
export const LOAD_EXPECTED =
  'a load such as resistor 220 kΩ, choke 250 H, transformer 1:3, phones 2 kΩ, a part of the catalogue such as ' +
  'transformer plain 1:3, or a mapping such as { kind: resistor, resistance: 220 kΩ }';

/** The values that each kind of load has. */
export const LOAD_KEYS: Readonly<Record<WrittenLoad['kind'], readonly string[]>> = {
  resistor: Object.keys(resistor.shape),
  choke: Object.keys(choke.shape),
  transformer: Object.keys(transformer.shape),
  phones: Object.keys(phones.shape),
};

/** What stands between plate and supply, with the load's own values. */
export const plateLoad = z
  .discriminatedUnion('kind', [resistor, choke, transformer, phones], { error: () => LOAD_EXPECTED })
  .meta({ description: 'Plate load: resistor 220 kΩ, choke 250 H, transformer 1:3, phones 2 kΩ, or a mapping' })
  .prefault({ kind: 'resistor' } as never);

export type WrittenLoad = z.output<typeof plateLoad>;

/** A load on one line as the mapping it stands for; a bare resistance is a resistor. */
export function loadMapping(written: Written): Readonly<Record<string, Written>> | { readonly fault: Fault } {
  const text = String(written).trim();
  const [, word, rest] = /^([a-z]*)(.*)$/is.exec(text) ?? ['', '', ''];
  // R47 is a resistance, and so is a bare number
  const bare = word === '' || /^r$/i.test(word ?? '');
  const kind = bare ? 'resistor' : KINDS.find((known) => known === word?.toLowerCase());
  if (kind === undefined) return { fault: { code: 'unknown-load', where: '', got: text, expected: LOAD_EXPECTED } };
  return oneLine(kind, bare ? text : (rest ?? '').trim());
}

/** A matching transformer on one line: its ratio, or a part of the catalogue. */
export function matchingMapping(written: Written): Readonly<Record<string, Written>> {
  const { kind, ...values } = oneLine(
    'transformer',
    String(written)
      .trim()
      .replace(/^transformer\s*/i, ''),
  );
  return kind === undefined ? {} : values;
}

/** A value that begins like a number is the main one; else it names a part. */
function oneLine(kind: string, rest: string): Readonly<Record<string, Written>> {
  if (rest === '') return { kind };
  if (kind !== 'resistor' && /[a-z]{3}/i.test(rest) && !/^[\d.:]+\s*(m|k|µ|u)?(hy?|henr\w*|ohms?|Ω)?$/i.test(rest)) {
    return { kind, part: rest };
  }
  return { kind, [MAIN_VALUE[kind] as string]: rest };
}
