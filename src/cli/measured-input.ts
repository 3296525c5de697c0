import { basename } from 'node:path';
import { type MeasuredCurve, measuredCurve } from '../results/measured-curve.ts';
import { onePlainLine } from '../results/plain-line.ts';
import { readTable } from './hearing-input.ts';
import { type RawOptions, text } from './options.ts';

/** The response that `--measured` names, or null where it names none. Throws InputError. */
export async function measuredFrom(options: RawOptions): Promise<MeasuredCurve | null> {
  const file = text(options, 'measured');
  if (file === null) return null;
  return { ...measuredCurve(await readTable(file, '--measured'), file), file: onePlainLine(basename(file)) };
}
