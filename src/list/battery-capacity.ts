import { readQuantity } from '../engine/parts/quantities.ts';
import type { Reading, Written } from './fields.ts';

export const CAPACITY_EXPECTED = 'a battery capacity such as 500 mAh or 1.2 Ah, or none';

const AMP_HOURS = { atLeast: 1e-3, atMost: 1000 } as const;

/** A battery's capacity, A·h: a current with an h behind it. A bare number could be either unit, and is refused. */
export function readBatteryCapacity(written: Written): Reading<number | null> {
  const text = String(written).trim();
  if (/^none$/i.test(text)) return { value: null };
  const wrong = { code: 'not-a-capacity', where: '', got: text || 'nothing', expected: CAPACITY_EXPECTED };
  if (!/a\s*[·.-]?\s*h$/i.test(text)) return { fault: wrong };
  const reading = readQuantity(text.replace(/\s*[·.-]?\s*h$/i, ''), 'current', '', AMP_HOURS);
  if ('value' in reading) return reading;
  if (reading.fault.code !== 'out-of-range') return { fault: wrong };
  return { fault: { ...reading.fault, got: text, expected: '1 mAh to 1000 Ah' } };
}
