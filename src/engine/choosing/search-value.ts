import { crossing, lastThatHolds, lowest } from './crossing.ts';
import { bestOf, nearestByFigure, nearestOf } from './nearest-value.ts';

/** Where a value is looked for, and among which a builder can pick. */
export interface Scale {
  /** Ends of the range, above 0, the lower first. */
  readonly low: number;
  readonly high: number;
  /** Points a decade at which the whole range is looked at first, so that no bend of the figure is passed over. */
  readonly perDecade: number;
  /** Values that can be had, ascending, within the range or 0; all of them are looked at. */
  readonly members: readonly number[];
  /** Whether 0, the part left out, is a value too. */
  readonly zero: boolean;
}

/** What is to be met, as a function of one part's value. */
export interface Meeting {
  /** Signed and continuous, 0 where the goal is met; NaN where the circuit cannot be. */
  readonly errorAt: (value: number) => number;
  /** How far the figure is from the goal, 0 and up; infinite where there is no such figure. */
  readonly missAt: (value: number) => number;
}

export interface Met {
  /** Every value at which the goal is met, ascending; empty when there is none in the range. */
  readonly exact: readonly number[];
  /** The value that comes nearest to the goal, where none meets it; null where the circuit can be at no value. */
  readonly nearest: number | null;
  /** Distance of each member from the goal, in their order. */
  readonly misses: readonly number[];
  /** The member nearest to the goal; null where none has the figure. */
  readonly best: number | null;
}

/** Values that agree this closely, as a part of themselves, are the same. */
const AGREE = 1e-10;
/** Farthest, in the units of a miss, that a value called exact may be from the goal: rounding, not a jump over it. */
const MET = 1e-4;
/** A bend that comes this near to the goal, as a part of its distance at the point looked at, is looked at closely. */
const NEAR_BEND = 0.5;

/** Finds every value that meets a goal; yields how far it has come, 0 to 1. */
export function* searchValue(scale: Scale, { errorAt, missAt }: Meeting): Generator<number, Met> {
  const values = scanned(scale);
  const errors: number[] = [];
  const misses = new Map<number, number>();
  const members = new Set(scale.members);
  for (const value of values) {
    errors.push(errorAt(value));
    if (members.has(value)) misses.set(value, missAt(value));
    yield errors.length / (values.length + 1);
  }
  intoTheEdges(values, errors, errorAt);
  const exact: number[] = [];
  const keep = (value: number): void => {
    if (missAt(value) < MET && !exact.some((other) => Math.abs(other - value) <= 1e-7 * value)) exact.push(value);
  };
  const between = (a: number, b: number, atA: number, atB: number): void => {
    if (atA === 0) keep(a);
    if (atB === 0) keep(b);
    if (!(atA * atB < 0)) return;
    const found = a > 0 ? throughLogs(errorAt, a, b, atA, atB) : crossing(errorAt, a, b, atA, atB, AGREE * b);
    if (Number.isFinite(found)) keep(found);
  };
  for (let k = 0; k + 1 < values.length; k++) {
    between(values[k] as number, values[k + 1] as number, errors[k] as number, errors[k + 1] as number);
    const bend = bendAt(values, errors, k);
    if (!bend) continue;
    const [a, b] = [Math.log(values[k - 1] as number), Math.log(values[k + 1] as number)];
    const turned = lowest((t) => bend.side * errorAt(Math.exp(t)), a, b, 1e-7, 0);
    const middle = Math.exp(turned.x);
    const atMiddle = bend.side * turned.value;
    if (turned.value > 0) continue;
    between(values[k - 1] as number, middle, errors[k - 1] as number, atMiddle);
    between(middle, values[k + 1] as number, atMiddle, errors[k + 1] as number);
  }
  exact.sort((a, b) => a - b);
  return {
    exact,
    nearest: exact[0] ?? nearestByFigure(values, nearestOf(values, errors, errorAt), misses, missAt, errorAt),
    misses: scale.members.map((member) => misses.get(member) ?? Number.POSITIVE_INFINITY),
    best: bestOf(scale.members, (member) => misses.get(member) ?? Number.POSITIVE_INFINITY),
  };
}

/** What is to be as large as can be while something else holds, as functions of one part's value. */
export interface Loudness {
  /** Level, above 0; NaN where the circuit cannot be. */
  readonly levelAt: (value: number) => number;
  /** Signed, above 0 where the limit is kept, continuous near the limit; not asked where the circuit cannot be. */
  readonly marginAt: (value: number) => number;
  /** Whether the limit is kept. */
  readonly keptAt: (value: number) => boolean;
}

export interface Loudest {
  /** The loudest value that keeps the limit; null where none does. */
  readonly exact: number | null;
  /** The value that comes nearest to the limit, where none keeps it. */
  readonly nearest: number | null;
  /** The loudest member that keeps the limit; null where none does. */
  readonly best: number | null;
}

/** Finds the loudest value that keeps a limit; yields how far it has come, 0 to 1. */
export function* searchLoudest(scale: Scale, { levelAt, marginAt, keptAt }: Loudness): Generator<number, Loudest> {
  const values = scanned(scale);
  const levels: number[] = [];
  const kept: boolean[] = [];
  for (const value of values) {
    const level = levelAt(value);
    levels.push(level);
    kept.push(Number.isFinite(level) && keptAt(value));
    yield levels.length / (values.length + 1);
  }
  let exact: number | null = null;
  let most = Number.NEGATIVE_INFINITY;
  const offer = (value: number, level: number): void => {
    if (level > most) [most, exact] = [level, value];
  };
  const holds = (t: number): boolean => {
    const value = Math.exp(t);
    return Number.isFinite(levelAt(value)) && keptAt(value);
  };
  values.forEach((value, k) => {
    if (!kept[k]) return;
    offer(value, levels[k] as number);
    if (value === 0) return;
    // as far as the limit allows, to either side
    for (const other of [k - 1, k + 1]) {
      const beyond = values[other];
      if (beyond === undefined || beyond === 0 || kept[other]) continue;
      const edge = Math.exp(lastThatHolds(holds, Math.log(value), Math.log(beyond), AGREE));
      offer(edge, levelAt(edge));
    }
  });
  const top = exact === null ? -1 : values.indexOf(exact);
  const [below, above] = [values[top - 1] ?? 0, values[top + 1] ?? 0];
  // a peak between points, all of it within the limit
  if (top > 0 && below > 0 && above > 0 && kept[top - 1] && kept[top + 1]) {
    const peak = lowest((t) => -levelAt(Math.exp(t)), Math.log(below), Math.log(above), 1e-6);
    if (holds(peak.x)) offer(Math.exp(peak.x), -peak.value);
  }
  const margins =
    exact === null ? values.map((value, k) => (Number.isFinite(levels[k]) ? marginAt(value) : Number.NaN)) : [];
  const member = (value: number): number => {
    const at = values.indexOf(value);
    return kept[at] ? -(levels[at] as number) : Number.POSITIVE_INFINITY;
  };
  return {
    exact,
    nearest: exact ?? nearestOf(values, margins, marginAt),
    best: bestOf(scale.members, member),
  };
}

/** The points looked at: even steps of the logarithm, every member, and 0 where it is a value. */
function scanned({ low, high, perDecade, members, zero }: Scale): number[] {
  const count = Math.max(1, Math.ceil(perDecade * Math.log10(high / low)));
  const even = Array.from({ length: count + 1 }, (_, k) => (k === count ? high : low * (high / low) ** (k / count)));
  return [...new Set([...(zero ? [0] : []), ...even, ...members])].sort((a, b) => a - b);
}

/** Puts in the last value that can be beside one that cannot: a figure may run far in that gap. */
function intoTheEdges(values: number[], errors: number[], errorAt: (value: number) => number): void {
  for (let k = values.length - 2; k >= 0; k--) {
    const [a, b] = [values[k] as number, values[k + 1] as number];
    const [canA, canB] = [Number.isFinite(errors[k]), Number.isFinite(errors[k + 1])];
    if (canA === canB || a === 0) continue;
    const can = (t: number): boolean => Number.isFinite(errorAt(Math.exp(t)));
    const edge = Math.exp(lastThatHolds(can, Math.log(canA ? a : b), Math.log(canA ? b : a), 1e-6));
    values.splice(k + 1, 0, edge);
    errors.splice(k + 1, 0, errorAt(edge));
  }
}

/** Whether the error turns round at a point before it reaches 0, near enough that it may reach it between the points. */
function bendAt(values: readonly number[], errors: readonly number[], k: number): { readonly side: number } | null {
  if (k === 0 || k + 1 >= values.length || !((values[k - 1] as number) > 0)) return null;
  const [before, here, after] = [errors[k - 1] as number, errors[k] as number, errors[k + 1] as number];
  const side = Math.sign(here);
  if (!(side * before > 0 && side * after > 0 && side * here <= side * before && side * here <= side * after))
    return null;
  const [x0, x1, x2] = [values[k - 1], values[k], values[k + 1]].map((value) => Math.log(value as number)) as [
    number,
    number,
    number,
  ];
  const rise = (after - here) / (x2 - x1);
  const fall = (here - before) / (x1 - x0);
  const bow = (rise - fall) / (x2 - x0);
  if (bow === 0) return null;
  const slope = fall + bow * (x1 - x0);
  const turn = here - (slope * slope) / (4 * bow);
  return side * turn < NEAR_BEND * side * here ? { side } : null;
}

function throughLogs(errorAt: (value: number) => number, a: number, b: number, atA: number, atB: number): number {
  return Math.exp(crossing((t) => errorAt(Math.exp(t)), Math.log(a), Math.log(b), atA, atB, AGREE));
}
