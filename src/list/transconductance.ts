import type { Fault } from '../engine/errors.ts';
import { readWritten, writtenValue } from '../engine/parts/letter-codes.ts';

const POWER: Readonly<Record<string, number>> = { '': 0, m: -3, u: -6, micro: -6, milli: -3 };
const LEAST_SIEMENS = 1e-6;
const MOST_SIEMENS = 1;

/**
 * Reads a transconductance as data sheets print it: `1600 µmho`, `1.6 mA/V`, `1600 µS`; a plain number is in siemens.
 *
 * @returns siemens, 1 µS to 1 S, or a fault without its place: `not-a-quantity`, `wrong-unit`, `out-of-range`
 */
export function readTransconductance(written: string | number): { value: number } | { fault: Fault } {
  const got = String(written);
  const fault = (code: string, expected: string): { fault: Fault } => ({ fault: { code, where: '', got, expected } });
  const number = readWritten(got);
  if (typeof number === 'string') return fault('not-a-quantity', SLOPE_EXPECTED);
  const unit = /^(micro|milli|m|u)?(a\/v|s|siemens|mhos?)?$/i.exec(number.suffix);
  const power = unit ? POWER[unit[1] ?? ''] : undefined;
  if (power === undefined) return fault('wrong-unit', SLOPE_EXPECTED);
  const value = writtenValue(number, power);
  if (!(value >= LEAST_SIEMENS && value <= MOST_SIEMENS)) return fault('out-of-range', '1 µS to 1 S');
  return { value };
}

/** What a fault says is expected of a transconductance. */
export const SLOPE_EXPECTED = 'a transconductance such as 1600 µmho, 1.6 mA/V, 1600 µS';
