import type { PartFault } from '../engine/circuits/part-faults.ts';
import type { Fault } from '../engine/errors.ts';
import { nearestName } from '../engine/parts/nearest-name.ts';
import { type QuantityReading, readQuantity } from '../engine/parts/quantities.ts';
import type { Reading, Written } from './fields.ts';
import { plainWords } from './words.ts';

/** How each fault is written, with a value where it has one. */
const EXAMPLES = {
  'leaky coupling': 'leaky coupling 2 MΩ',
  'leaky bypass': 'leaky bypass 500 kΩ',
  'weak tube': 'weak tube 60 %',
  'leak drifted': 'leak drifted +80 %',
  'open bypass': 'open bypass',
  'open leak': 'open leak',
  'shorted bypass': 'shorted bypass',
} as const;
type Kind = keyof typeof EXAMPLES;
const KINDS = Object.keys(EXAMPLES) as Kind[];

/** What a fault of this key says would be right. */
export const PART_FAULT_EXPECTED = `none, or ${Object.values(EXAMPLES).slice(0, -1).join(', ')}; several with "and" between`;

/** Resistances of leaking capacitors: below a kilohm it is a short. */
const LEAKING_OHMS = { atLeast: 1e3, atMost: 1e12 } as const;
/** A tube with less than a fiftieth of its emission is dead. */
const EMISSION = { atLeast: 0.02, atMost: 1 } as const;
const DRIFT = { atLeast: -0.95, atMost: 20 } as const;

/** Reads `none`, one fault, or several with `and` between them. */
export function readPartFaults(written: Written): Reading<readonly PartFault[]> {
  const text = plainWords(String(written)).replace(/\bgrid leak\b/gi, 'leak');
  if (/^none$/i.test(text)) return { value: [] };
  const found: PartFault[] = [];
  for (const part of text.split(/\s+and\s+/i)) {
    const reading = readOne(part);
    if ('fault' in reading) return reading;
    found.push(reading.value);
  }
  return { value: found };
}

function readOne(text: string): Reading<PartFault> {
  const [, words, value] = /^([a-z ]*?)\s*(?:\bcapacitor\b\s*)?([-+\d.].*)?$/i.exec(text) ?? ['', text, ''];
  const said = (words ?? '').trim().toLowerCase();
  const kind = KINDS.find((known) => known === said);
  const wrong = (code: string, expected: string, hint?: string): { fault: Fault } => ({
    fault: { code, where: '', got: text || 'nothing', expected, ...(hint === undefined ? {} : { hint }) },
  });
  if (kind === undefined) {
    const near = nearestName(said, KINDS);
    return wrong('unknown-fault', PART_FAULT_EXPECTED, near === null ? undefined : `nearest: ${near}`);
  }
  const valued = EXAMPLES[kind] !== kind;
  if (valued !== (value !== undefined && value !== '')) return wrong('wrong-value', `as in ${EXAMPLES[kind]}`);
  const quantity = (reading: QuantityReading, made: (value: number) => PartFault): Reading<PartFault> =>
    'fault' in reading ? { fault: { ...reading.fault, got: text } } : { value: made(reading.value) };
  switch (kind) {
    case 'leaky coupling':
    case 'leaky bypass':
      return quantity(readQuantity(value ?? '', 'resistance', '', LEAKING_OHMS), (ohms) => ({ kind, ohms }));
    case 'weak tube':
      return quantity(readQuantity(value ?? '', 'fraction', '', EMISSION), (share) => ({ kind, share }));
    case 'leak drifted':
      // 80 % could mean by or to: the sign says by
      if (!/^[-+]/.test(value ?? '')) return wrong('wrong-value', 'a change with its sign, as in leak drifted +80 %');
      return quantity(readQuantity(value ?? '', 'fraction', '', DRIFT), (by) => ({ kind, by }));
    default:
      return { value: { kind } };
  }
}
