import * as z from 'zod';
import type { Fault } from '../engine/errors.ts';
import { quantity, type Written } from './fields.ts';

const LOAD_OHMS = { atLeast: 1, atMost: 1e9 } as const;

const resistor = z.strictObject({
  kind: z.literal('resistor'),
  resistance: quantity('resistance', LOAD_OHMS, 'Resistance of the load').prefault('220 kΩ'),
});

/** The value that stands behind each kind of load when it is written on one line. */
const MAIN_VALUE: Readonly<Record<string, string>> = { resistor: 'resistance' };

const KINDS = Object.keys(MAIN_VALUE);
/** What a fault says is expected of a load. */
export const LOAD_EXPECTED = `a load such as resistor 220 kΩ, or a mapping { kind: resistor, resistance: 220 kΩ }; kinds: ${KINDS.join(', ')}`;

/** What stands between plate and supply, with the load's own values. */
export const plateLoad = z
  .discriminatedUnion('kind', [resistor], { error: () => LOAD_EXPECTED })
  .meta({ description: 'Plate load: resistor 220 kΩ, or a mapping with its own values' })
  .prefault({ kind: 'resistor' } as never);

/** A load on one line as the mapping it stands for; a bare resistance is a resistor. */
export function loadMapping(written: Written): Readonly<Record<string, Written>> | { readonly fault: Fault } {
  const text = String(written).replace(/\s+/g, ' ').trim();
  const word = /^([a-z][a-z ]*?)(?: (?=[\d.+-]|r\d)|$)/i.exec(text)?.[1];
  const kind = word === undefined ? 'resistor' : KINDS.find((known) => known === word.toLowerCase());
  if (kind === undefined) {
    return { fault: { code: 'unknown-load', where: '', got: text, expected: LOAD_EXPECTED } };
  }
  const rest = text.slice(word?.length ?? 0).trim();
  const key = MAIN_VALUE[kind];
  return rest === '' || key === undefined ? { kind } : { kind, [key]: rest };
}
