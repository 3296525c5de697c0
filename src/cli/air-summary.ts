import { AIR_NOTE, airRows } from '../results/air-table.ts';
import type { Result } from '../results/result.ts';
import { plainTable } from './plain-table.ts';

/** What is on the air and how the wanted station is heard, a column a variant; nothing where nothing is there. */
export function airSummary({ variants }: Result): string {
  const rows = airRows(variants);
  if (rows.length === 0) return '';
  return ['On the air:', plainTable(['', ...variants.map(({ name }) => name)], rows), '', AIR_NOTE].join('\n');
}
