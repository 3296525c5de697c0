import { magnitude } from '../engine/circuits/complex.ts';
import { LinearResponse, REFERENCE_HERTZ } from '../engine/circuits/response.ts';
import type { RestPoint } from '../engine/circuits/rest-point.ts';
import { InputError } from '../engine/errors.ts';
import { onePlainLine } from './plain-line.ts';
import type { MeasuredRecord } from './result.ts';
import type { TwoColumns } from './two-columns.ts';

/** A response as a builder measured it, dB re its own level at 400 Hz. */
export interface MeasuredCurve {
  readonly file: string;
  readonly hertz: readonly number[];
  readonly decibels: readonly number[];
}

/** Readings above this number are brought together: more tell no more, and each costs a solution of the circuit. */
const MANY_READINGS = 240;
const PER_OCTAVE = 24;

/**
 * A table of Hz and dB or volts as a response. Volts become dB; where 400 Hz lies within the table, its level there,
 * read off between the nearest two readings, becomes 0 dB.
 *
 * @throws InputError `no-reference` for volts that do not reach over 400 Hz
 */
export function measuredCurve({ hertz, values, unit }: TwoColumns, file: string): MeasuredCurve {
  const decibels = unit === 'volts' ? values.map((volts) => 20 * Math.log10(volts)) : [...values];
  const reference = levelAt({ hertz, decibels }, REFERENCE_HERTZ);
  if (reference === null && unit === 'volts') {
    throw new InputError({
      code: 'no-reference',
      where: onePlainLine(file),
      got: `volts from ${hertz[0]} to ${hertz.at(-1)} Hz`,
      expected: 'readings below and above 400 Hz, to which levels are referred, or a column of dB re 400 Hz',
    });
  }
  return { file: onePlainLine(file), hertz, decibels: decibels.map((value) => value - (reference ?? 0)) };
}

/** The level between two readings over the logarithm of frequency; null outside them. */
export function levelAt(curve: Pick<MeasuredCurve, 'hertz' | 'decibels'>, hertz: number): number | null {
  const at = curve.hertz.findIndex((one) => one >= hertz);
  if (at < 0) return null;
  const above = curve.hertz[at] as number;
  const atAbove = curve.decibels[at] as number;
  if (above === hertz) return atAbove;
  if (at === 0) return null;
  const below = curve.hertz[at - 1] as number;
  const atBelow = curve.decibels[at - 1] as number;
  return atBelow + ((atAbove - atBelow) * Math.log(hertz / below)) / Math.log(above / below);
}

/** A finely stepped sweep brought together to a twenty-fourth of an octave; each reading keeps its weight. */
export function thinned({ hertz, decibels }: Pick<MeasuredCurve, 'hertz' | 'decibels'>): {
  readonly hertz: readonly number[];
  readonly decibels: readonly number[];
  readonly readings: readonly number[];
} {
  if (hertz.length <= MANY_READINGS) return { hertz, decibels, readings: hertz.map(() => 1) };
  const groups = new Map<number, number[]>();
  hertz.forEach((f, k) => {
    const group = Math.round(PER_OCTAVE * Math.log2(f));
    groups.set(group, [...(groups.get(group) ?? []), k]);
  });
  const mean = (of: (k: number) => number, group: readonly number[]): number =>
    group.reduce((sum, k) => sum + of(k), 0) / group.length;
  const all = [...groups.values()];
  return {
    hertz: all.map((group) => Math.exp(mean((k) => Math.log(hertz[k] as number), group))),
    decibels: all.map((group) => mean((k) => decibels[k] as number, group)),
    readings: all.map((group) => group.length),
  };
}

/** The curve as a result holds it. */
export function measuredRecord({ file, hertz, decibels }: MeasuredCurve): MeasuredRecord {
  return { file, points: hertz.map((f, k) => ({ hertz: f, decibels: decibels[k] as number })) };
}

/** How far a circuit's response is from a measured one, rms over the readings, dB; both re 400 Hz. */
export function rmsDifference(rest: RestPoint, curve: MeasuredCurve): number {
  const response = new LinearResponse(rest);
  const reference = magnitude(response.at(REFERENCE_HERTZ).output);
  const { hertz, decibels, readings } = thinned(curve);
  let sum = 0;
  hertz.forEach((f, k) => {
    const apart = (decibels[k] as number) - response.decibels(f, reference);
    sum += (readings[k] as number) * apart * apart;
  });
  return Math.sqrt(sum / curve.hertz.length);
}

/** The measured level at a row's frequency; null outside the readings. */
export function measuredAt({ points }: MeasuredRecord, hertz: number): number | null {
  return levelAt({ hertz: points.map((point) => point.hertz), decibels: points.map((point) => point.decibels) }, hertz);
}
