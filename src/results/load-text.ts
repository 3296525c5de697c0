import type { Phones, PlateLoad } from '../engine/circuits/circuit.ts';
import { formatQuantity } from '../engine/parts/format-quantity.ts';

/** A plate load in a few words: `resistor 220 kΩ`, `transformer 1:3, 40 H`. */
export function loadText(load: PlateLoad): string {
  switch (load.kind) {
    case 'resistor':
      return `resistor ${formatQuantity(load.ohms, 'resistance')}`;
    case 'choke':
      return `choke ${formatQuantity(load.henries, 'inductance')}, ${formatQuantity(load.dcOhms, 'resistance')} DC`;
    case 'transformer':
      return `transformer ${formatQuantity(load.ratio, 'ratio')}, ${formatQuantity(load.primaryHenries, 'inductance', 3)}`;
    case 'phones':
      return phonesText(load);
  }
}

export function phonesText(phones: Phones): string {
  return `phones ${formatQuantity(phones.dcOhms, 'resistance')}, ${formatQuantity(phones.henries, 'inductance', 3)}`;
}
