import type { DetectorCircuit } from '../circuits/circuit.ts';
import { solveReal } from '../circuits/dense-solve.ts';
import { CircuitFigures, unlessImpossible } from './figures.ts';
import { type FigureGoal, missDecibels, searchError } from './goals.ts';
import { leastSquares, type Residuals, slopesAt } from './least-squares.ts';
import type { Scale } from './search-value.ts';

type Pair = readonly [number, number];

/** What is asked: values of two parts of a circuit that meet two goals at once. */
export interface PairQuestion {
  readonly goals: readonly [FigureGoal, FigureGoal];
  readonly scales: readonly [Scale, Scale];
  /** Where the search begins besides a coarse look round, base SI units. */
  readonly standing: Pair;
  /** The circuit with these values. May raise InputError. */
  readonly circuitAt: (values: Pair) => DetectorCircuit;
}

export interface PairChoice {
  /** Every pair found that meets both goals, the loudest first; empty when none does. */
  readonly exact: readonly Pair[];
  /** The first of them, or the pair that comes nearest; null where no pair lets the circuit be. */
  readonly nearest: Pair | null;
  /** The best of the pairs that can be had about the exact ones; null where none has both figures. */
  readonly best: Pair | null;
}

/** Places a coordinate at which the goals are looked at before the search. */
const LOOK_ROUND = 7;
const MOST_STARTS = 5;
const MOST_ROUNDS = 20;
/** Newton's steps are halved this far before a start is given up. */
const LEAST_SHARE = 0.02;
/** Starts from which the nearest pair is sought where none meets the goals, and how closely. */
const NEAREST_STARTS = 2;
const NEAREST_GAIN = 1e-4;
/** Errors this small, dB, are rounding. */
const MET = 1e-9;
/** Farthest that a pair called exact may be from either goal, dB: rounding, not a jump over it. */
const MET_BY_FIGURE = 1e-4;
/** Values that can be had which are tried to each side of an exact one. */
const NEIGHBOURS = 2;

/** Chooses the values of two parts; yields how far it has come, 0 to 1. */
export function* choosePair({ goals, scales, standing, circuitAt }: PairQuestion): Generator<number, PairChoice> {
  const figuresAt = (values: Pair): CircuitFigures | null =>
    unlessImpossible(() => new CircuitFigures(circuitAt(values)));
  const errors: Residuals = {
    low: Float64Array.from(scales, (scale) => Math.log(scale.low)),
    high: Float64Array.from(scales, (scale) => Math.log(scale.high)),
    at: (place) => {
      const figures = figuresAt(valuesOf(place, scales));
      if (!figures) return null;
      const found = Float64Array.from(goals, ({ figure, target }) => searchError(figures, figure, target));
      return found.every(Number.isFinite) ? found : null;
    },
  };
  const looked: { readonly place: Float64Array; readonly sum: number }[] = [];
  const round = lookRound(standing, errors);
  for (const [k, place] of round.entries()) {
    const found = errors.at(place);
    if (found) looked.push({ place, sum: Math.hypot(...found) });
    yield (0.6 * (k + 1)) / round.length;
  }
  looked.sort((a, b) => a.sum - b.sum);
  const misses = (values: Pair): number => {
    const figures = figuresAt(values);
    const far = goals.map(({ figure, target }) =>
      figures ? missDecibels(figure, figures.value(figure), target) : null,
    );
    return far.some((miss) => miss === null) ? Number.POSITIVE_INFINITY : Math.hypot(...(far as number[]));
  };
  const exact: { readonly values: Pair; readonly volts: number }[] = [];
  let nearest: { readonly place: Float64Array; readonly sum: number } | null = null;
  const starts = looked.slice(0, MOST_STARTS);
  for (const [k, { place }] of starts.entries()) {
    const root = dampedNewton(errors, place);
    const values = root && valuesOf(root, scales);
    if (values && misses(values) < MET_BY_FIGURE) {
      const known = exact.some((one) =>
        one.values.every((value, c) => Math.abs(value / (values[c] as number) - 1) < 1e-6),
      );
      if (!known) exact.push({ values, volts: figuresAt(values)?.audioVolts() ?? 0 });
    } else if (exact.length === 0 && k < NEAREST_STARTS) {
      const settled = leastSquares(errors, place, () => false, NEAREST_GAIN);
      if (settled && !(settled.sum >= (nearest?.sum ?? Number.POSITIVE_INFINITY))) nearest = settled;
    }
    yield 0.6 + (0.3 * (k + 1)) / starts.length;
  }
  exact.sort((a, b) => b.volts - a.volts);
  const centres = exact.length > 0 ? exact.map((one) => one.values) : nearest ? [valuesOf(nearest.place, scales)] : [];
  let best: Pair | null = null;
  let least = Number.POSITIVE_INFINITY;
  for (const centre of centres) {
    for (const pair of pairsAbout(centre, scales)) {
      const far = misses(pair);
      if (far < least) [least, best] = [far, pair];
      yield 0.95;
    }
  }
  return { exact: exact.map((one) => one.values), nearest: centres[0] ?? null, best };
}

/** Newton's steps, halved while they do not bring the errors down; null where it comes to no root. */
export function dampedNewton(errors: Residuals, start: Float64Array): Float64Array | null {
  let place = start;
  let here = errors.at(place);
  for (let round = 0; here && round < MOST_ROUNDS; round++) {
    const size = Math.hypot(...here);
    if (size < MET) return place;
    const slopes = slopesAt(errors, place, here);
    const step = here.slice();
    if (!slopes || !solveReal(slopes, place.length, step, 1)) return null;
    let next: { place: Float64Array; here: Float64Array } | null = null;
    for (let share = 1; !next && share > LEAST_SHARE; share *= 0.5) {
      const trial = place.map((x, c) =>
        Math.min(Math.max(x - share * (step[c] as number), errors.low[c] as number), errors.high[c] as number),
      );
      const found = errors.at(trial);
      if (found && Math.hypot(...found) < size * (1 - 0.1 * share)) next = { place: trial, here: found };
    }
    if (!next) return size < 1e4 * MET ? place : null;
    ({ place, here } = next);
  }
  return null;
}

/** Rounding of exponent and logarithm must not carry a value over the end of its range. */
function valuesOf(place: Float64Array, scales: readonly [Scale, Scale]): Pair {
  const value = (c: 0 | 1): number => Math.min(Math.max(Math.exp(place[c] as number), scales[c].low), scales[c].high);
  return [value(0), value(1)];
}

/** A grid over the box, and the standing values. */
function lookRound(standing: Pair, { low, high }: Residuals): Float64Array[] {
  const along = (c: 0 | 1): number[] =>
    Array.from({ length: LOOK_ROUND }, (_, k) => {
      const share = (k + 0.5) / LOOK_ROUND;
      return (low[c] as number) + share * ((high[c] as number) - (low[c] as number));
    });
  const grid = along(0).flatMap((a) => along(1).map((b) => Float64Array.of(a, b)));
  return [Float64Array.from(standing, Math.log), ...grid];
}

/** Pairs of members about two values, the nearest few of each to either side. */
function pairsAbout(centre: Pair, scales: readonly [Scale, Scale]): Pair[] {
  const [first, second] = [0, 1].map((c) => {
    const { members } = scales[c as 0 | 1];
    const value = centre[c as 0 | 1];
    const below = members.filter((member) => member <= value).slice(-NEIGHBOURS);
    const above = members.filter((member) => member > value).slice(0, NEIGHBOURS);
    return [...below, ...above];
  }) as [number[], number[]];
  return first.flatMap((a) => second.map((b): Pair => [a, b]));
}
