import type { Electrode, MeterReading, SocketRow } from '../engine/circuits/meter-readings.ts';
import { formatQuantity } from '../engine/parts/format-quantity.ts';
import type { VariantResult } from './result.ts';

/** Electrodes in the order of a service sheet, as they are called in tables. */
const ELECTRODES: readonly (readonly [Electrode, string])[] = [
  ['plate', 'plate'],
  ['grid', 'grid'],
  ['cathode', 'cathode'],
  ['supply', 'supply at the load'],
  ['diode load', 'live end of the diode load'],
  ['behind coupling', 'behind the coupling capacitor'],
];

/** What stands over the table. */
export const SOCKET_NOTE =
  'Volts against the chassis, carrier on: true, and as a meter of that resistance reads them, for a meter loads what it ' +
  'measures. Analogue ranges are the smallest that hold the true voltage (common practice, no source). Points that every ' +
  'meter reads true have one row.';

/** A reading within this share of the true voltage is called true: a tenth of the 3 % that analogue meters claim. */
const SAME = 0.003;
/** Voltages below this are called none, V. */
const NOTHING_VOLTS = 1e-6;

/** The rows of the socket-voltage table, one column a variant. */
export function socketTable(variants: readonly VariantResult[]): string[][] {
  return ELECTRODES.flatMap(([electrode, name]) => {
    const found = variants.map((variant) => variant.socket.find((row) => row.electrode === electrode));
    if (found.every((row) => row === undefined)) return [];
    const trueRow = [name, ...found.map((row) => (row === undefined ? '' : voltsText(row.volts)))];
    return found.every((row) => row === undefined || isReadTrue(row))
      ? [trueRow]
      : [trueRow, ...meterRows(name, found)];
  });
}

function meterRows(name: string, found: readonly (SocketRow | undefined)[]): string[][] {
  const meters = [...new Set(found.flatMap((row) => row?.readings.map(({ meter }) => meter) ?? []))];
  return meters.map((meter) => [
    `${name}, by ${meter}`,
    ...found.map((row) => {
      const reading = row?.readings.find((one) => one.meter === meter);
      return reading === undefined ? '' : readingText(reading);
    }),
  ]);
}

function readingText({ volts, rangeVolts, meter }: MeterReading): string {
  if (rangeVolts === null) return voltsText(volts);
  if (Math.abs(volts) > rangeVolts) return `over ${formatQuantity(rangeVolts, 'voltage')}`;
  // a range that the meter's name already tells is not told again
  const range = formatQuantity(rangeVolts, 'voltage');
  return meter.endsWith(range) ? voltsText(volts) : `${voltsText(volts)} (${range})`;
}

function isReadTrue({ volts, readings }: SocketRow): boolean {
  return readings.every((reading) => Math.abs(reading.volts - volts) <= SAME * Math.abs(volts) + NOTHING_VOLTS);
}

function voltsText(volts: number): string {
  return Math.abs(volts) < NOTHING_VOLTS ? '0 V' : formatQuantity(volts, 'voltage', 3);
}
