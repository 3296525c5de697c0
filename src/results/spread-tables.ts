import { formatQuantity, type QuantityKind } from '../engine/parts/format-quantity.ts';
import { toleranceText } from '../engine/parts/tolerance.ts';
import type { FigureRecord, OneCircuit, SpreadPart, SpreadResult, SpreadVariant } from './spread-result.ts';

/** A table of a spread, for the terminal and for a write-up alike. */
export interface SpreadTable {
  readonly title: string;
  readonly note: string;
  readonly heads: readonly string[];
  readonly rows: readonly (readonly string[])[];
}

const QUANTILE_HEADS = ['nominal', '5 %', 'median', '95 %', 'least', 'most'] as const;
const QUANTILES = ['nominal', 'low5', 'median', 'high95', 'least', 'most'] as const;

const percent = (share: number | null): string => (share === null ? '-' : `${(100 * share).toFixed(0)} %`);
const decibels = (value: number): string => {
  const text = value.toFixed(1);
  return text === '-0.0' ? '0.0' : text;
};
const change = (value: number): string => `${value > 0 ? '+' : ''}${decibels(value)}`;
const second = (value: number): string => `${value.toFixed(1)} %`;

/** All tables of one variant. `hertz` picks rows of the response; left out, every third octave. */
export function spreadTables(result: SpreadResult, variant: SpreadVariant, hertz?: readonly number[]): SpreadTable[] {
  return [
    partsTable(result, variant),
    figuresTable(variant),
    responseTable(variant, hertz),
    endsTable(variant),
    cornersTable(variant),
  ].filter((table) => table.rows.length > 0);
}

/** What carries most, what failed: what a builder reads first. */
export function spreadSentences({ parts, circuits, failed }: SpreadVariant): string[] {
  const largest = (key: keyof SpreadPart['share']): SpreadPart | undefined =>
    [...parts].sort((a, b) => (b.share[key] ?? 0) - (a.share[key] ?? 0))[0];
  const carries = (what: string, key: keyof SpreadPart['share']): string[] => {
    const part = largest(key);
    const share = part?.share[key] ?? null;
    return part && share !== null ? [`Most of the spread ${what}: ${part.name}, ${percent(share)}.`] : [];
  };
  const lost = Object.entries(failed).map(
    ([code, count]) => `${count} of ${circuits + totalOf(failed)} circuits left out: ${FAILURES[code] ?? code}.`,
  );
  if (parts.length === 0) return ['No part of this circuit varies.'];
  return [...carries('at 5 kHz', 'fiveKilohertz'), ...carries('of the level', 'level'), ...lost];
}

const FAILURES: Readonly<Record<string, string>> = {
  oscillates: 'the stage would oscillate',
  'no-rest-point': 'no direct-current solution',
  'no-steady-state': 'no settled tone at 80 % modulation',
};

const totalOf = (counts: Readonly<Record<string, number>>): number =>
  Object.values(counts).reduce((sum, count) => sum + count, 0);

/** How the circuits were drawn and the shares found: part of every output. */
export function spreadMethod(result: SpreadResult): string {
  return (
    `${result.runs} random circuits, seed ${result.seed}. Parts are drawn independently, evenly over their tolerance; ` +
    'the grid current (and what is written ×/÷) evenly in ratio. Without a tolerance on the list: ' +
    (result.parts === 'old'
      ? 'capacitors ±10 % (mica), resistors -10/+30 % (carbon, drifted)'
      : 'capacitors and resistors ±5 % (film)') +
    ", a tube's current and slope ±25 % together, its grid current ×/÷ 3, all else as written. The dial is set again " +
    'for every circuit as for the nominal one. Shares of the variance, in decibels, are those each part carries by ' +
    'itself, by a fit of lines and parabolas to the random circuits; what is left acts together.'
  );
}

const hasPlate = ({ plateVolts }: SpreadVariant): boolean => plateVolts.nominal !== 0;

function partsTable(result: SpreadResult, variant: SpreadVariant): SpreadTable {
  const sorted = [...variant.parts].sort((a, b) => (b.share.fiveKilohertz ?? 0) - (a.share.fiveKilohertz ?? 0));
  const rows = sorted.map((part) => [
    part.name,
    part.key === 'detector.tube' ? '-' : formatQuantity(part.nominal, part.kind as QuantityKind, 3),
    toleranceText({ least: part.least / part.nominal, most: part.most / part.nominal, evenIn: part.evenIn }),
    part.stated ? 'list' : result.parts,
    percent(part.share.fiveKilohertz),
    percent(part.share.level),
  ]);
  const { fiveKilohertz, level } = variant.shareTogether;
  const together = ['parts together', '', '', '', percent(fiveKilohertz), percent(level)];
  return {
    title: 'Parts',
    note: 'Share of the variance of 5 kHz re 400 Hz, and of the level.',
    heads: ['part', 'nominal', 'tolerance', 'from', '5 kHz', 'level'],
    rows: rows.length > 0 && fiveKilohertz !== null ? [...rows, together] : rows,
  };
}

function figuresTable(variant: SpreadVariant): SpreadTable {
  const row = (name: string, figure: FigureRecord, show: (value: number) => string, never = '-'): string[] => [
    name,
    ...QUANTILES.map((key) => {
      const value = figure[key];
      return value === null ? never : show(value);
    }),
  ];
  const quantity =
    (kind: QuantityKind) =>
    (value: number): string =>
      formatQuantity(value, kind, 3);
  return {
    title: 'Figures',
    note: 'Audio is 400 Hz at 30 % modulation; the second harmonic is that of 400 Hz at 80 %.',
    heads: ['figure', ...QUANTILE_HEADS],
    rows: [
      row('audio, rms', variant.levelVoltsRmsAt30Percent, quantity('voltage')),
      row('low corner, -3 dB', variant.lowCornerHertz, quantity('frequency'), 'below 1 Hz'),
      row('high corner, -3 dB', variant.highCornerHertz, quantity('frequency'), 'above 16 kHz'),
      row('second harmonic', variant.secondPercent, second),
      ...(hasPlate(variant) ? [row('plate at rest', variant.plateVolts, quantity('voltage'))] : []),
      row('loaded Q', variant.loadedQ, quantity('number')),
    ],
  };
}

function responseTable(variant: SpreadVariant, hertz?: readonly number[]): SpreadTable {
  const shown = hertz ? variant.response.filter((row) => hertz.includes(row.hertz)) : variant.response;
  return {
    title: 'Response',
    note: "dB re each circuit's own 400 Hz.",
    heads: ['Hz', ...QUANTILE_HEADS],
    rows: shown.map((row) => [String(row.hertz), ...QUANTILES.map((key) => decibels(row[key] ?? 0))]),
  };
}

function endsTable(variant: SpreadVariant): SpreadTable {
  const nominal = variant.response.find((row) => row.hertz === 5000)?.nominal ?? 0;
  const cells = (one: OneCircuit): string[] =>
    'failed' in one
      ? [FAILURES[one.failed] ?? one.failed, '']
      : [change(one.fiveKilohertzDecibels - nominal), change(one.levelDecibels)];
  const at = (part: SpreadPart, value: number): string =>
    part.key === 'detector.tube' ? `×${value.toFixed(2)}` : formatQuantity(value, part.kind as QuantityKind, 3);
  return {
    title: 'One part at an end of its tolerance, all others nominal',
    note: 'Change against the nominal circuit, dB: 5 kHz re 400 Hz, and level.',
    heads: ['part', 'at least', '5 kHz', 'level', 'at most', '5 kHz', 'level'],
    rows: variant.parts.map((part) => [
      part.name,
      at(part, part.least),
      ...cells(part.atLeast),
      at(part, part.most),
      ...cells(part.atMost),
    ]),
  };
}

function cornersTable(variant: SpreadVariant): SpreadTable {
  const hertz = (value: number | null, never: string): string =>
    value === null ? never : formatQuantity(value, 'frequency', 3);
  const rows = Object.entries(variant.corners).map(([corner, { figures }]) =>
    'failed' in figures
      ? [corner, FAILURES[figures.failed] ?? figures.failed, '', '', '', '']
      : [
          corner,
          decibels(figures.fiveKilohertzDecibels),
          `${change(figures.levelDecibels)}`,
          hertz(figures.highCornerHertz, 'above 16 kHz'),
          second(figures.secondPercent),
          hasPlate(variant) ? formatQuantity(figures.plateVolts, 'voltage', 3) : '-',
        ],
  );
  return {
    title: 'All parts at their worst ends at once',
    note: 'Ends chosen by what each part does by itself; level in dB against the nominal circuit.',
    heads: ['corner', '5 kHz', 'level', 'high corner', 'second harmonic', 'plate'],
    rows: variant.parts.length > 0 ? rows : [],
  };
}
