import { gatherCautions, gatheredText } from '../results/caution-list.ts';
import type { SpreadResult } from '../results/spread-result.ts';
import { spreadMethod, spreadSentences, spreadTables } from '../results/spread-tables.ts';
import { plainTable } from './plain-table.ts';

/** Rows of the response on the terminal; the files have every third octave. */
const SHOWN_HERTZ = [50, 100, 200, 1000, 2000, 3150, 5000, 8000, 10_000];
const LINE_WIDTH = 100;

/** A spread for the terminal, a block a variant. */
export function spreadSummary(result: SpreadResult): string {
  const blocks = result.variants.map((variant) => {
    const tables = spreadTables(result, variant, SHOWN_HERTZ).map(
      ({ title, note, heads, rows }) => `${title}. ${note}\n${plainTable(heads, rows)}\n`,
    );
    return [variant.name, ...spreadSentences(variant), '', ...tables].join('\n');
  });
  const cautions = gatherCautions(result.variants).map((caution) => {
    const who = caution.names.length === 0 ? '' : ` (${caution.names.join(', ')})`;
    return `Caution${who}: ${gatheredText(caution)}`;
  });
  return [wrapped(spreadMethod(result)), ...blocks, cautions.join('\n')].join('\n\n').trimEnd();
}

/** Text in lines no longer than the terminal's. */
function wrapped(text: string): string {
  return text.split(' ').reduce((lines, word) => {
    const last = lines.slice(lines.lastIndexOf('\n') + 1);
    return lines === '' ? word : `${lines}${last.length + word.length >= LINE_WIDTH ? '\n' : ' '}${word}`;
  }, '');
}
