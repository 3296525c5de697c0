import { formatQuantity, type QuantityKind } from '../engine/parts/format-quantity.ts';
import { AIR_NOTE, airRows } from './air-table.ts';
import { gatherCautions, gatheredText } from './caution-list.ts';
import { COST_PARTS } from './cost-parts.ts';
import { measuredAt } from './measured-curve.ts';
import { onePlainLine } from './plain-line.ts';
import type { RestRecord, Result, VariantResult } from './result.ts';
import { SOCKET_NOTE, socketTable } from './socket-table.ts';

/** The working point's rows in the order a service sheet gives them: electrode voltages, currents, slopes, signal. */
const REST_ROWS: readonly (readonly [string, keyof RestRecord, QuantityKind])[] = [
  ['plate', 'plateVolts', 'voltage'],
  ['grid', 'gridVolts', 'voltage'],
  ['plate current', 'plateAmps', 'current'],
  ['grid current', 'gridAmps', 'current'],
  ['supply current', 'supplyAmps', 'current'],
  ['plate dissipation', 'plateWatts', 'power'],
  ['dissipation in the load', 'loadWatts', 'power'],
  ['amplification factor', 'amplificationFactor', 'number'],
  ['plate resistance', 'plateResistanceOhms', 'resistance'],
  ['transconductance', 'transconductanceSiemens', 'number'],
  ['stage gain at 400 Hz', 'stageGain', 'number'],
  ['grid resistance', 'gridResistanceOhms', 'resistance'],
  ['input capacitance, audio', 'inputCapacitanceFaradsAtAudio', 'capacitance'],
  ['input capacitance, carrier', 'inputCapacitanceFaradsAtCarrier', 'capacitance'],
  ['input resistance, carrier', 'inputResistanceOhms', 'resistance'],
  ['carrier at the grid, rms', 'carrierAtGridVoltsRms', 'voltage'],
  ['carrier on the plate, rms', 'carrierOnPlateVoltsRms', 'voltage'],
  ['corner of leak and grid capacitor', 'leakCornerHertz', 'frequency'],
  ['corner of the grid circuit', 'gridCornerHertz', 'frequency'],
];

/** Frequency at which the cost by part is tabled: where speech turns dull first. */
const COST_HERTZ = 5000;

type Row = readonly string[];

/**
 * The tables of a result as Markdown to paste into a write-up: response, corners, cost by part at 5 kHz, rest point,
 * socket voltages, distortion and sensitivity, one column a variant, and the cautions. Decibels have one decimal, percentages three
 * significant digits, quantities four with SI prefixes. Names are escaped, so none can become markup.
 */
export function responseMarkdown(result: Result): string {
  const { variants } = result;
  const names = variants.map((variant) => markdownText(variant.name));
  const section = (title: string, note: string, corner: string, rows: readonly Row[]): string =>
    rows.length === 0 ? '' : `### ${title}\n\n${note === '' ? '' : `${note}\n\n`}${table([corner, ...names], rows)}\n`;
  return [
    section('Response', 'Audio at the output, dB re 400 Hz.', 'Hz', responseRows(variants)),
    measuredSection(result),
    heardSection(variants),
    section('Corners', 'Where the response is 3 dB down on 400 Hz.', 'corner', cornerRows(variants)),
    section(
      'Cost by part at 5 kHz',
      'Decibels that would come back if that part alone were ideal. The costs do not add up exactly.',
      'part',
      costRows(variants),
    ),
    section('Rest point', 'Carrier on, not modulated.', 'quantity', restRows(variants)),
    section('Socket voltages', SOCKET_NOTE, 'electrode', socketTable(variants)),
    section('Distortion', 'Percent of the fundamental.', 'signal', distortionRows(variants)),
    airSection(variants),
    section('Sensitivity', '400 Hz at 30 % modulation.', 'carrier', sensitivityRows(variants)),
    cautionList(variants),
  ]
    .filter((text) => text !== '')
    .join('\n');
}

/** A name or sentence that shows as it is in Markdown: one line, no markup, no HTML, no cell border. */
export function markdownText(text: string): string {
  return onePlainLine(text)
    .replace(/[\\`*_[\]|~$!#]/g, '\\$&')
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('://', '\\://');
}

function responseRows(variants: readonly VariantResult[]): Row[] {
  const hertz = unionOf(variants, (variant) => variant.response.map((row) => row.hertz));
  return hertz.map((f) => [
    String(f),
    ...variants.map((variant) => decibels(variant.response.find((row) => row.hertz === f)?.decibels)),
  ]);
}

/** Readings beside the response, and what is left between them. */
function measuredSection({ measured, variants }: Result): string {
  if (!measured) return '';
  const hertz = unionOf(variants, (variant) => variant.response.map((row) => row.hertz));
  const rows = hertz.flatMap((f): Row[] => {
    const reading = measuredAt(measured, f);
    if (reading === null) return [];
    const differences = variants.map((variant) => {
      const computed = variant.response.find((row) => row.hertz === f)?.decibels;
      return computed === undefined ? '' : decibels(reading - computed);
    });
    return [[String(f), decibels(reading), ...differences]];
  });
  const rms = variants.map((variant) => variant.measured?.rmsDifferenceDecibels.toFixed(2) ?? '');
  const single = variants.length === 1;
  const heads = variants.map((variant) => (single ? 'difference' : `difference, ${markdownText(variant.name)}`));
  const note = `${markdownText(measured.file)}, dB re its own level at 400 Hz; difference: measured less response. The rms is over all readings.`;
  return `### Measured\n\n${note}\n\n${table(['Hz', 'measured', ...heads], [...rows, ['rms', '', ...rms]])}\n`;
}

/** What is heard through, in its own table: it is no part of the circuit's response. */
function heardSection(all: readonly VariantResult[]): string {
  const variants = all.filter((variant) => variant.heardThrough);
  const curves = [...new Map(variants.map((variant) => [variant.heardThrough?.name ?? '', variant])).values()];
  if (curves.length === 0) return '';
  const hertz = unionOf(curves, (variant) => variant.response.map((row) => row.hertz));
  const rows = hertz.map((f) => [
    String(f),
    ...curves.map((variant) => decibels(variant.response.find((row) => row.hertz === f)?.heardThroughDecibels)),
  ]);
  const heads = ['Hz', ...curves.map((variant) => markdownText(variant.heardThrough?.name ?? ''))];
  return `### Heard through\n\ndB re 400 Hz, to be added to the response: the clips go through it, the tables do not.\n\n${table(heads, rows)}\n`;
}

/** What is on the air, for the variants that have something there. */
function airSection(all: readonly VariantResult[]): string {
  const rows = airRows(all).map(([name, ...cells]) => [name as string, ...cells.map(markdownText)]);
  if (rows.length === 0) return '';
  const heads = ['at the output, rms', ...all.map((variant) => markdownText(variant.name))];
  return `### On the air\n\n${AIR_NOTE}\n\n${table(heads, rows)}\n`;
}

function cornerRows(variants: readonly VariantResult[]): Row[] {
  const cell = (hertz: number | null): string =>
    hertz === null ? 'not reached' : formatQuantity(hertz, 'frequency', 3);
  return [
    ['low', ...variants.map((variant) => cell(variant.lowCornerHertz))],
    ['high', ...variants.map((variant) => cell(variant.highCornerHertz))],
  ];
}

function costRows(variants: readonly VariantResult[]): Row[] {
  if (!variants.some((variant) => variant.response.some((row) => row.hertz === COST_HERTZ))) return [];
  return COST_PARTS.map(({ key, name }) => [
    name,
    ...variants.map((variant) => decibels(variant.response.find((row) => row.hertz === COST_HERTZ)?.cost[key])),
  ]);
}

function restRows(variants: readonly VariantResult[]): Row[] {
  return REST_ROWS.map(([name, key, kind]) => [
    name,
    ...variants.map((variant) => {
      const value = variant.rest[key];
      return key === 'transconductanceSiemens'
        ? `${formatQuantity(value * 1e6, 'number')} µS`
        : formatQuantity(value, kind);
    }),
  ]);
}

function distortionRows(variants: readonly VariantResult[]): Row[] {
  const kinds = [
    ['second', 'secondPercent'],
    ['third', 'thirdPercent'],
    ['total', 'totalPercent'],
  ] as const;
  const signals = unionOf(variants, (variant) => variant.distortion.map((row) => row.hertz)).flatMap((hertz) =>
    unionOf(variants, (variant) => variant.distortion.map((row) => row.modulationPercent)).map(
      (modulation) => [hertz, modulation] as const,
    ),
  );
  return signals.flatMap(([hertz, modulation]) => {
    const found = variants.map((variant) =>
      variant.distortion.find((row) => row.hertz === hertz && row.modulationPercent === modulation),
    );
    if (found.every((row) => row === undefined)) return [];
    const signal = `${formatQuantity(hertz, 'frequency')}, ${formatQuantity(modulation, 'number')} % modulation`;
    return kinds.map(([name, key]) => [`${signal}, ${name}`, ...found.map((row) => percent(row?.[key]))]);
  });
}

function sensitivityRows(variants: readonly VariantResult[]): Row[] {
  const levels = unionOf(variants, (variant) => variant.sensitivity.map((row) => row.levelVoltsRms));
  return levels.flatMap((level) => {
    const found = variants.map((variant) => variant.sensitivity.find((row) => row.levelVoltsRms === level));
    const carrier = formatQuantity(level, 'voltage');
    return [
      [`${carrier}, audio rms`, ...found.map((row) => quantityOrNothing(row?.audioVoltsRmsAt30Percent))],
      [`${carrier}, second harmonic`, ...found.map((row) => percent(row?.secondPercent))],
    ];
  });
}

function cautionList(variants: readonly VariantResult[]): string {
  const cautions = gatherCautions(variants);
  if (cautions.length === 0) return '';
  const lines = cautions.map((caution) => {
    const who = caution.names.length === 0 ? '' : `**${markdownText(caution.names.join(', '))}:** `;
    return `- ${who}${markdownText(gatheredText(caution))}\n`;
  });
  return `### Cautions\n\n${lines.join('')}`;
}

function unionOf(variants: readonly VariantResult[], keys: (variant: VariantResult) => readonly number[]): number[] {
  return [...new Set(variants.flatMap(keys))].sort((a, b) => a - b);
}

function table(heading: Row, rows: readonly Row[]): string {
  const line = (cells: Row): string => `| ${cells.join(' | ')} |\n`;
  const rule = heading.map((_, column) => (column === 0 ? '---' : '---:'));
  return line(heading) + line(rule) + rows.map(line).join('');
}

function decibels(value: number | undefined): string {
  if (value === undefined) return '';
  const text = value.toFixed(1);
  return text === '-0.0' ? '0.0' : text;
}

function percent(value: number | undefined): string {
  return value === undefined ? '' : `${formatQuantity(value, 'number', 3)} %`;
}

function quantityOrNothing(value: number | undefined): string {
  return value === undefined ? '' : formatQuantity(value, 'voltage', 3);
}
