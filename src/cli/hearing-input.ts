import { readFile } from 'node:fs/promises';
import { dirname, isAbsolute, join } from 'node:path';
import { InputError } from '../engine/errors.ts';
import { HEARING_CURVES, HEARING_NAMES, type HearingCurve } from '../engine/hearing/hearing-curves.ts';
import { nearestName } from '../engine/parts/nearest-name.ts';
import { readTwoColumns, type TwoColumns } from '../results/two-columns.ts';

/** Largest table of the builder's own that is read, bytes. */
const LARGEST_TABLE_BYTES = 2_000_000;

/**
 * The curve of that name, or of a file beside the list (beside the working folder when there is no list).
 *
 * @throws InputError `unknown-hearing`, and those of reading a table
 */
export async function hearingCurve(name: string, list: string | null): Promise<HearingCurve> {
  const known = HEARING_CURVES.find((curve) => curve.name === name.toLowerCase());
  if (known) return known;
  if (!/\.(csv|txt|tsv)$/i.test(name)) {
    const near = nearestName(name, HEARING_NAMES);
    throw new InputError({
      code: 'unknown-hearing',
      where: 'output.heard through',
      got: name,
      expected: `one of ${HEARING_NAMES.join(', ')}, or a file of your own such as cone.csv`,
      ...(near === null ? {} : { hint: `nearest: ${near}` }),
    });
  }
  const path = list === null || isAbsolute(name) ? name : join(dirname(list), name);
  const table = await readTable(path, 'output.heard through');
  if (table.unit !== 'decibels') {
    throw new InputError({ code: 'curve-in-volts', where: path, got: 'a column of volts', expected: 'Hz and dB' });
  }
  const points = table.hertz.map((hertz, k) => ({ hertz, decibels: table.values[k] as number }));
  return { name, sections: [], points, source: 'as given' };
}

/** Reads a table of Hz and dB or volts from disk; faults name the file as it was given. */
export async function readTable(path: string, where: string): Promise<TwoColumns> {
  let bytes: Uint8Array;
  try {
    bytes = await readFile(path);
  } catch (error) {
    const code = error instanceof Error && 'code' in error ? String(error.code) : '';
    const got = code === 'ENOENT' || code === 'ENOTDIR' ? `no file ${path}` : `${path}, which cannot be read (${code})`;
    throw new InputError({ code: 'table-unreadable', where, got, expected: 'a text file of two columns, Hz and dB' });
  }
  if (bytes.length > LARGEST_TABLE_BYTES || bytes.includes(0)) {
    throw new InputError({
      code: 'table-not-text',
      where: path,
      got: 'a file that is no table',
      expected: 'two columns, Hz and dB',
    });
  }
  return readTwoColumns(new TextDecoder().decode(bytes), path);
}
