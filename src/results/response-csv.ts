import { measuredAt } from './measured-curve.ts';
import { onePlainLine } from './plain-line.ts';
import type { MeasuredRecord, ResponseRow, Result, VariantResult } from './result.ts';

/** One column of a variant's group: its heading with the unit, and the number of a row. */
interface Column {
  readonly heading: string;
  readonly value: (row: ResponseRow) => number | null;
}

const COLUMNS: readonly Column[] = [
  { heading: 'response (dB re 400 Hz)', value: (row) => row.decibels },
  { heading: 'phase (degrees)', value: (row) => row.phaseDegrees },
  { heading: 'output at 30 % modulation (V rms)', value: (row) => row.voltsRmsAt30Percent },
  { heading: 'cost of tuned circuit (dB)', value: (row) => row.cost.tunedCircuit },
  { heading: 'cost of grid capacitor (dB)', value: (row) => row.cost.gridCapacitor },
  { heading: 'cost of plate bypass (dB)', value: (row) => row.cost.plateBypass },
  { heading: 'cost of load and coupling (dB)', value: (row) => row.cost.load },
];

const HEARD: Column = { heading: 'heard through (dB re 400 Hz)', value: (row) => row.heardThroughDecibels ?? 0 };

/** The group of a variant: a column more where it is heard through something, and one where it is held to readings. */
function columnsOf(variant: VariantResult, measured: MeasuredRecord | undefined): readonly Column[] {
  const columns = variant.heardThrough ? [...COLUMNS, HEARD] : COLUMNS;
  if (!measured) return columns;
  const difference = (row: ResponseRow): number | null => {
    const reading = measuredAt(measured, row.hertz);
    return reading === null ? null : reading - row.decibels;
  };
  return [...columns, { heading: 'difference, measured less response (dB)', value: difference }];
}

/**
 * The response as comma-separated values: one row a frequency, one group of columns a variant, units in the
 * heading, decimal points, numbers unrounded, rows ended by CR LF (RFC 4180, from memory). A frequency that a variant
 * lacks leaves its cells empty, and so does one outside the readings. A byte order mark stands in front only when a name has letters beyond ASCII, since some
 * spreadsheets take such a file for another encoding without it.
 *
 * A cell never starts with a variant's name, so none can be taken for a formula; semicolons in names become commas,
 * since a spreadsheet that separates by semicolons would start a cell after one.
 */
export function responseCsv(result: Result): string {
  const { measured } = result;
  const rowsByHertz = result.variants.map((variant) => new Map(variant.response.map((row) => [row.hertz, row])));
  const allHertz = [...new Set(rowsByHertz.flatMap((rows) => [...rows.keys()]))].sort((a, b) => a - b);
  const heading = [
    'frequency (Hz)',
    ...result.variants.flatMap((variant) => {
      const name = onePlainLine(variant.name).replaceAll(';', ',');
      return columnsOf(variant, measured).map((column) => `${column.heading}: ${name}`);
    }),
    ...(measured ? [`measured (dB re 400 Hz): ${measured.file.replaceAll(';', ',')}`] : []),
  ];
  const lines = allHertz.map((hertz) => [
    numberCell(hertz),
    ...rowsByHertz.flatMap((rows, k) => {
      const row = rows.get(hertz);
      return columnsOf(result.variants[k] as VariantResult, measured).map((column) =>
        row === undefined ? '' : numberCell(column.value(row)),
      );
    }),
    ...(measured ? [numberCell(measuredAt(measured, hertz))] : []),
  ]);
  const text = [heading.map(textCell), ...lines].map((cells) => `${cells.join(',')}\r\n`).join('');
  return /[^\r\n -~]/.test(text) ? `\ufeff${text}` : text;
}

function numberCell(value: number | null): string {
  if (value === null) return '';
  if (!Number.isFinite(value)) throw new Error(`internal: ${value} in the response table`);
  return String(value);
}

function textCell(text: string): string {
  return /[",]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
}
