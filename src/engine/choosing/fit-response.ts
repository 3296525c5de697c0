import type { DetectorCircuit } from '../circuits/circuit.ts';
import { CircuitFigures, unlessImpossible } from './figures.ts';
import { inverseOf, leastSquares, normalMatrix, type Residuals, type Settled, slopesAt } from './least-squares.ts';
import { profileEnd } from './profile-interval.ts';
import { studentQuantile } from './student.ts';

/** A response as it was measured. Only its shape counts: the level belongs to the meter and the generator. */
export interface Measurement {
  /** Hz, above 0. */
  readonly hertz: readonly number[];
  readonly decibels: readonly number[];
  /** How many readings each stands for. */
  readonly readings: readonly number[];
}

/** A part whose value is sought: its range and where the search begins, base SI units, above 0. */
export interface SoughtPart {
  readonly low: number;
  readonly high: number;
  readonly standing: number;
}

export interface FitQuestion {
  readonly measurement: Measurement;
  /** One to three. */
  readonly parts: readonly SoughtPart[];
  /** The circuit with these values, in the order of the parts. May raise InputError. */
  readonly circuitAt: (values: readonly number[]) => DetectorCircuit;
}

export interface FittedPart {
  readonly value: number;
  /** Ends of the 95 % interval; 0 and infinity where the measurement does not tell. */
  readonly low: number;
  readonly high: number;
  /** Whether the value stands at an end of its range, so that the interval means nothing. */
  readonly atEnd: boolean;
}

export interface Fit {
  readonly parts: readonly FittedPart[];
  /**
   * Other values, far from these, that the measurement cannot tell from them: two falls of the response may each be the
   * grid's or the plate's. Those nearest to the standing values are given as `parts`.
   */
  readonly others: readonly (readonly FittedPart[])[];
  /** What the fitted circuit leaves of the measurement, rms over the readings, dB. */
  readonly rmsDecibels: number;
  /** Readings less what was fitted: the values, and the level. */
  readonly degrees: number;
  /** How far each pair of values can be traded for one another, −1 to 1, row by row; null where nothing is told. */
  readonly correlations: readonly (readonly number[])[] | null;
}

/** Chance that an interval holds the true value, were the errors of the readings normal and alike. */
const CONFIDENCE = 0.95;
/** Places at which the search begins: what stands on the list, and the lowest of a coarse look round. */
const MOST_STARTS = 4;
/** Decades about the standing value at which it looks round, for one or two parts and for three. */
const LOOK_ROUND = [-2, -1, 0, 1, 2] as const;
const LOOK_ROUND_THREE = [-1, 0, 1] as const;
/** A start that is still this many times worse than the best after a few rounds is given up. */
const HOPELESS = 3;
const FEW_ROUNDS = 6;
/** Logarithms this near to a place already found lead to it. */
const SAME_PLACE = 0.02;
/** An interval wider than this ratio to either side tells nothing. */
const TELLS_NOTHING = 100;
/** Values that go together this closely are traded for one another along a valley that bends. */
const TRADED = 0.9;

/**
 * The values that explain a measured response best, by least squares in the logarithms of the values, the level left
 * free; yields how far it has come, 0 to 1. Null where no start lets the circuit be.
 */
export function* fitResponse({ measurement, parts, circuitAt }: FitQuestion): Generator<number, Fit | null> {
  const residuals: Residuals = {
    low: Float64Array.from(parts, (part) => Math.log(part.low)),
    high: Float64Array.from(parts, (part) => Math.log(part.high)),
    at: (place) => {
      const circuit = (): DetectorCircuit => circuitAt([...place].map((log, k) => within(Math.exp(log), parts[k])));
      const figures = unlessImpossible(() => new CircuitFigures(circuit()));
      return figures && shapeResiduals(measurement, figures);
    },
  };
  const looked: { place: Float64Array; sum: number }[] = [];
  const round = lookRound(parts);
  for (const [k, place] of round.entries()) {
    const values = residuals.at(place);
    if (values) looked.push({ place, sum: values.reduce((sum, value) => sum + value * value, 0) });
    yield (0.5 * (k + 1)) / round.length;
  }
  looked.sort((a, b) => a.sum - b.sum);
  const spread: Float64Array[] = [];
  for (const { place } of looked) if (!spread.some((other) => areNeighbours(place, other))) spread.push(place);
  const standing = Float64Array.from(parts, (part) => Math.log(within(part.standing, part)));
  const starts = [standing, ...spread.filter((place) => apart(place, standing) > 0)];
  const found: Settled[] = [];
  const known = (place: Float64Array): boolean =>
    found.some((one) => one.place.every((log, k) => Math.abs(log - (place[k] as number)) < SAME_PLACE));
  for (const [k, place] of starts.slice(0, MOST_STARTS).entries()) {
    const least = Math.min(...found.map((one) => one.sum));
    const hopeless = (sum: number, round: number): boolean => round >= FEW_ROUNDS && sum > HOPELESS * least;
    const settled = leastSquares(residuals, place, (at, sum, round) => known(at) || hopeless(sum, round));
    if (settled && !known(settled.place)) found.push(settled);
    yield 0.5 + (0.5 * (k + 1)) / (MOST_STARTS + 1);
  }
  const least = Math.min(...found.map((one) => one.sum));
  const degrees = degreesOf(measurement, parts);
  const asGood = least * (1 + (parts.length * studentQuantile(CONFIDENCE, degrees) ** 2) / degrees);
  const [first, ...others] = found
    .filter((one) => one.sum <= asGood)
    .sort((a, b) => apart(a.place, standing) - apart(b.place, standing))
    .map((one) => judged(residuals, one, measurement, parts));
  return first ? { ...first, others: others.map((one) => one.parts) } : null;
}

/** Whether two places of the look round lie side by side, across corners too. */
function areNeighbours(a: Float64Array, b: Float64Array): boolean {
  return a.every((log, k) => Math.abs(log - (b[k] as number)) < 1.01 * Math.LN10);
}

/** Distance between two places, logarithms. */
function apart(a: Float64Array, b: Float64Array): number {
  return Math.hypot(...a.map((log, k) => log - (b[k] as number)));
}

/** Measured less computed, the mean difference taken out, each by the root of its readings. */
export function shapeResiduals({ hertz, decibels, readings }: Measurement, figures: CircuitFigures): Float64Array {
  const apart = Float64Array.from(hertz, (f, k) => (decibels[k] as number) - figures.decibels(f));
  let sum = 0;
  let count = 0;
  for (const [k, n] of readings.entries()) {
    sum += n * (apart[k] as number);
    count += n;
  }
  return apart.map((value, k) => Math.sqrt(readings[k] as number) * (value - sum / count));
}

/** Rounding of exponent and logarithm must not carry a value over the end of its range. */
function within(value: number, part: SoughtPart | undefined): number {
  return part ? Math.min(Math.max(value, part.low), part.high) : value;
}

/** Places a decade apart about the standing values, in every combination. */
function lookRound(parts: readonly SoughtPart[]): Float64Array[] {
  const decades = parts.length > 2 ? LOOK_ROUND_THREE : LOOK_ROUND;
  let places: number[][] = [[]];
  for (const part of parts) {
    const logs = new Set(decades.map((decade) => Math.log(within(part.standing * 10 ** decade, part))));
    places = places.flatMap((place) => [...logs].map((log) => [...place, log]));
  }
  return places.map((place) => Float64Array.from(place));
}

/**
 * The interval of each value: from the slopes at the place found and what is left there, or where values can be traded
 * for one another by walking along the valley.
 */
function judged(
  residuals: Residuals,
  at: Settled,
  measurement: Measurement,
  parts: readonly SoughtPart[],
): Omit<Fit, 'others'> {
  const p = parts.length;
  const degrees = degreesOf(measurement, parts);
  const slopes = slopesAt(residuals, at.place, at.residuals);
  const inverse = slopes && inverseOf(normalMatrix(slopes, p), p);
  const t = studentQuantile(CONFIDENCE, degrees);
  const variance = at.sum / degrees;
  const entry = (a: number, b: number): number => (inverse ? (inverse[a * p + b] as number) : Number.NaN);
  const correlations = inverse
    ? parts.map((_, a) => parts.map((__, b) => entry(a, b) / Math.sqrt(entry(a, a) * entry(b, b))))
    : null;
  const traded = (k: number): boolean =>
    correlations?.[k]?.some((value, other) => other !== k && Math.abs(value) > TRADED) ?? false;
  return {
    parts: [...at.place].map((log, k) => {
      const reach = t * Math.sqrt(variance * entry(k, k));
      const value = within(Math.exp(log), parts[k]);
      const { low, high } = parts[k] as SoughtPart;
      const end = (side: number): number => {
        if (!(reach < Math.log(TELLS_NOTHING))) return side * Number.POSITIVE_INFINITY;
        if (!traded(k)) return log + side * reach;
        return profileEnd(residuals, at, k, side * reach, at.sum + variance * t * t);
      };
      return {
        value,
        low: Math.exp(end(-1)),
        high: Math.exp(end(1)),
        atEnd: value <= low * 1.001 || value >= high / 1.001,
      };
    }),
    rmsDecibels: Math.sqrt(at.sum / measurement.readings.reduce((sum, n) => sum + n, 0)),
    degrees,
    correlations,
  };
}

/** Readings less what was fitted: the values, and the level. */
function degreesOf(measurement: Measurement, parts: readonly SoughtPart[]): number {
  return Math.max(1, measurement.hertz.length - parts.length - 1);
}
