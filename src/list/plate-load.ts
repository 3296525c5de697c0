import * as z from 'zod';
import type { PlateLoad } from '../engine/circuits/circuit.ts';
import { readQuantity } from '../engine/parts/quantities.ts';
import { choiceOr, quantity, quantityKinds, type Reading, readField, type Written } from './fields.ts';

const LOAD_OHMS = { atLeast: 1, atMost: 1e9 } as const;
const KNOWN_LOADS = 'resistor, the one kind of load this release knows';
const EXPECTED = 'a load such as resistor 220 kΩ, or a mapping { kind: resistor, resistance: 220 kΩ }';

/** Takes `resistor 220 kΩ` or a bare resistance, which means a resistor. */
function readLoad(written: Written): Reading<PlateLoad> {
  const text = String(written).trim();
  const word = /^([a-z][a-z ]*?)(?:\s+(?=[\d.+-]|r\d)|$)/i.exec(text)?.[1];
  if (word !== undefined && word.toLowerCase() !== 'resistor') {
    return { fault: { code: 'unknown-load', where: '', got: text, expected: KNOWN_LOADS, hint: EXPECTED } };
  }
  const value = readQuantity(text.slice(word?.length ?? 0).trim(), 'resistance', '', LOAD_OHMS);
  if ('fault' in value) {
    return { fault: { ...value.fault, got: text, ...(text.length === word?.length ? { expected: EXPECTED } : {}) } };
  }
  return { value: { kind: 'resistor', ohms: value.value } };
}

const loadMapping = z
  .strictObject({
    kind: choiceOr(['resistor'], 'resistor', 'Kind of load', {}, ', the one kind of load this release knows'),
    resistance: quantity('resistance', LOAD_OHMS, 'Resistance of the load').prefault('220 kΩ'),
  })
  .transform((load): PlateLoad => ({ kind: 'resistor', ohms: load.resistance }));

/** What stands between plate and supply: on one line, or as a mapping with the load's own values. */
export const plateLoad = z
  .union([readField(readLoad, EXPECTED, 'A resistor with its value'), loadMapping], { error: () => EXPECTED })
  .meta({ description: 'Plate load: resistor 220 kΩ, or a mapping' })
  .prefault('resistor 220 kΩ')
  .register(quantityKinds, { kind: 'resistance' });
