import { type Fault, InputError } from '../engine/errors.ts';

/** A table of two columns: frequency, and decibels or volts. */
export interface TwoColumns {
  readonly hertz: readonly number[];
  readonly values: readonly number[];
  /** What the second column holds, by its heading; decibels when it has none. */
  readonly unit: 'decibels' | 'volts';
}

/** Most rows that are read: a finely stepped sweep has a few thousand. */
const MOST_ROWS = 20_000;
const MOST_FAULTS = 5;

/**
 * Reads two columns of Hz and dB (or volts, when the heading says V): commas, semicolons, tabs or spaces between, decimal
 * points (or decimal commas where semicolons or tabs separate), `#` for remarks, headings on the first lines.
 *
 * @param file  as the person gave it, for faults
 * @returns     at least two rows, frequencies above 0 and rising
 * @throws InputError `table-row`, `table-frequency`, `table-value`, `table-order`, `table-short`, `table-long`
 */
export function readTwoColumns(text: string, file: string): TwoColumns {
  const hertz: number[] = [];
  const values: number[] = [];
  const faults: Fault[] = [];
  let unit: TwoColumns['unit'] = 'decibels';
  let headings = 0;
  const lines = text.replace(/^\uFEFF/, '').split(/\r\n|\n|\r/);
  for (const [index, line] of lines.entries()) {
    const bare = line.replace(/#.*$/, '').trim();
    if (bare === '' || faults.length >= MOST_FAULTS) continue;
    const fault = (code: string, got: string, expected: string): void => {
      faults.push({
        code,
        where: `line ${index + 1}`,
        got: got.slice(0, 60),
        expected,
        file,
        line: index + 1,
        column: 1,
      });
    };
    const [first = '', second = ''] = cells(bare);
    const f = Number(first);
    const v = Number(second);
    if (hertz.length === 0 && headings < 3 && !Number.isFinite(f)) {
      headings++;
      if (/\bv(olts?)?\b/i.test(second) && !/db/i.test(second)) unit = 'volts';
      continue;
    }
    if (first === '' || second === '' || !Number.isFinite(f) || !Number.isFinite(v)) {
      fault('table-row', bare, 'two numbers: Hz, then dB or volts');
    } else if (!(f > 0 && f <= 1e6)) fault('table-frequency', first, 'a frequency above 0 Hz');
    else if (unit === 'volts' ? !(v > 0 && v < 1e6) : Math.abs(v) > 400) {
      fault('table-value', second, unit === 'volts' ? 'volts above 0' : 'dB between −400 and 400');
    } else if (hertz.length > 0 && f <= (hertz[hertz.length - 1] as number)) {
      fault('table-order', first, 'a frequency above that of the line before');
    } else {
      hertz.push(f);
      values.push(v);
    }
  }
  if (faults.length > 0) throw new InputError(faults);
  const about = (code: string, got: string, expected: string): InputError =>
    new InputError({ code, where: file, got, expected });
  if (hertz.length < 2) throw about('table-short', `${hertz.length} rows of numbers`, 'two rows of Hz and dB or more');
  if (hertz.length > MOST_ROWS) throw about('table-long', `${hertz.length} rows`, `at most ${MOST_ROWS}`);
  return { hertz, values, unit };
}

/** A decimal comma can stand only where something else separates the cells. */
function cells(line: string): string[] {
  const separator = line.includes(';') ? ';' : line.includes('\t') ? '\t' : null;
  if (separator !== null) return line.split(separator).map((cell) => cell.trim().replace(',', '.'));
  return line.includes(',') ? line.split(',').map((cell) => cell.trim()) : line.split(/\s+/);
}
