import { onePlainLine } from './plain-line.ts';
import type { FigureRecord, SpreadResult } from './spread-result.ts';

const COLUMNS: readonly (readonly [heading: string, key: keyof FigureRecord])[] = [
  ['nominal (dB re 400 Hz)', 'nominal'],
  ['mean (dB re 400 Hz)', 'mean'],
  ['5 % of circuits below (dB re 400 Hz)', 'low5'],
  ['median (dB re 400 Hz)', 'median'],
  ['95 % of circuits below (dB re 400 Hz)', 'high95'],
  ['least (dB re 400 Hz)', 'least'],
  ['most (dB re 400 Hz)', 'most'],
];

/**
 * The band of responses as comma-separated values, in the form of the response's: one row a frequency, one group of
 * columns a variant, units in the heading, numbers unrounded, rows ended by CR LF, names at the end of a cell.
 */
export function spreadCsv(result: SpreadResult): string {
  const heading = [
    'frequency (Hz)',
    ...result.variants.flatMap((variant) => {
      const name = onePlainLine(variant.name).replaceAll(';', ',');
      return COLUMNS.map(([text]) => `${text}: ${name}`);
    }),
  ];
  const hertz = result.variants[0]?.response.map((row) => row.hertz) ?? [];
  const lines = hertz.map((f, k) => [
    String(f),
    ...result.variants.flatMap(({ response }) => COLUMNS.map(([, key]) => String(response[k]?.[key] ?? ''))),
  ]);
  const quoted = heading.map((cell) => (/[",]/.test(cell) ? `"${cell.replaceAll('"', '""')}"` : cell));
  const text = [quoted, ...lines].map((cells) => `${cells.join(',')}\r\n`).join('');
  return /[^\r\n -~]/.test(text) ? `\ufeff${text}` : text;
}
