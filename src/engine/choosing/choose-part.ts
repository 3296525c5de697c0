import type { DetectorCircuit } from '../circuits/circuit.ts';
import { CircuitFigures, unlessImpossible } from './figures.ts';
import { type Goal, keepsLimit, missDecibels, searchError } from './goals.ts';
import { type Scale, searchLoudest, searchValue } from './search-value.ts';

/** What is asked: the value of one part of a circuit that meets a goal. */
export interface PartQuestion {
  readonly goal: Goal;
  readonly scale: Scale;
  /** The circuit with that value. May raise InputError for a value that cannot be. */
  readonly circuitAt: (value: number) => DetectorCircuit;
}

export interface PartChoice {
  /** Every value in the range that meets the goal, the loudest first; empty when none does. */
  readonly exact: readonly number[];
  /** The first of them, or the value that comes nearest to the goal; null where no value lets the circuit be. */
  readonly nearest: number | null;
  /** The best of the values that can be had; null where none is of use. */
  readonly best: number | null;
}

/** Chooses a part's value; yields how far it has come, 0 to 1. */
export function* choosePart({ goal, scale, circuitAt }: PartQuestion): Generator<number, PartChoice> {
  const at = remembered((value: number) => unlessImpossible(() => new CircuitFigures(circuitAt(value))));
  if (goal.kind === 'loudest') {
    const { limit } = goal;
    const found = yield* searchLoudest(scale, {
      levelAt: (value) => at(value)?.audioVolts() ?? Number.NaN,
      keptAt: (value) => limit === null || keepsLimit(at(value) as CircuitFigures, limit),
      marginAt: (value) => (limit === null ? 0 : searchError(at(value) as CircuitFigures, limit.figure, limit.target)),
    });
    return { exact: found.exact === null ? [] : [found.exact], nearest: found.nearest, best: found.best };
  }
  const { figure, target } = goal;
  const found = yield* searchValue(scale, {
    errorAt: (value) => {
      const figures = at(value);
      return figures ? searchError(figures, figure, target) : Number.NaN;
    },
    missAt: (value) => {
      const miss = missDecibels(figure, at(value)?.value(figure) ?? null, target);
      return miss === null ? Number.POSITIVE_INFINITY : Math.abs(miss);
    },
  });
  const loudness = new Map(found.exact.map((value) => [value, at(value)?.audioVolts() ?? 0]));
  const exact = [...found.exact].sort((a, b) => (loudness.get(b) ?? 0) - (loudness.get(a) ?? 0));
  return { exact, nearest: exact[0] ?? found.nearest, best: found.best };
}

/** A function of one number whose last answer is kept: a value is asked for its error and its figure in turn. */
function remembered<Answer>(of: (value: number) => Answer): (value: number) => Answer {
  let last: { readonly value: number; readonly answer: Answer } | null = null;
  return (value) => {
    if (last === null || last.value !== value) last = { value, answer: of(value) };
    return last.answer;
  };
}
