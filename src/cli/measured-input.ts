import { type MeasuredCurve, measuredCurve } from '../results/measured-curve.ts';
import { readTable } from './hearing-input.ts';
import { type RawOptions, text } from './options.ts';

/** The response that `--measured` names, or null where it names none. Throws InputError. */
export async function measuredFrom(options: RawOptions): Promise<MeasuredCurve | null> {
  const file = text(options, 'measured');
  return file === null ? null : measuredCurve(await readTable(file, '--measured'), file);
}
