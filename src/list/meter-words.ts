import type { Meter } from '../engine/circuits/meter-readings.ts';
import { InputError } from '../engine/errors.ts';
import { type QuantityRange, readQuantity } from '../engine/parts/quantities.ts';
import { unitDescription } from '../engine/parts/units.ts';

const EXPECTED = "a meter's resistance such as 11M, or ohms per volt such as 20k/V, with its range as in '20k/V 50 V'";

/** Resistances of meters: from a bare movement's to an electrometer's. */
const METER_OHMS = { atLeast: 100, atMost: 1e13 } as const;
const RANGE_VOLTS = { atLeast: 1e-3, atMost: 10e3 } as const;

/**
 * Meters as a builder says them, a comma between: `11M`, `20k/V`, `20k/V 50 V`, `1000 ohms per volt`.
 *
 * @throws InputError at `where`
 */
export function readMeters(written: string, where: string): Meter[] {
  return written.split(',').map((one) => readMeter(one.trim(), where));
}

function readMeter(text: string, where: string): Meter {
  if (text === '') throw new InputError({ code: 'no-value', where, got: 'nothing', expected: EXPECTED });
  const [, ohms, range] =
    /^(.*?)\s*(?:\/\s*v(?:olts?)?|ohms?\s+per\s+volt|Ω\s+per\s+volt|per\s+volt)\b\s*(.*)$/i.exec(text) ?? [];
  const asExpected = (part: string, kind: 'resistance' | 'voltage', range: QuantityRange): number => {
    const reading = readQuantity(part, kind, where, range);
    if ('value' in reading) return reading.value;
    const { fault } = reading;
    const expected = fault.code === 'out-of-range' ? `${unitDescription(kind).noun} of ${fault.expected}` : EXPECTED;
    throw new InputError({ ...fault, got: text, expected });
  };
  if (ohms === undefined) return { kind: 'fixed', ohms: asExpected(text, 'resistance', METER_OHMS) };
  return {
    kind: 'per volt',
    ohmsPerVolt: asExpected(ohms, 'resistance', METER_OHMS),
    rangeVolts: range ? asExpected(range, 'voltage', RANGE_VOLTS) : null,
  };
}
