import { CircuitFigures, type Figure, type MovedFigures, unlessImpossible } from '../engine/choosing/figures.ts';
import type { Goal } from '../engine/choosing/goals.ts';
import type { AdjustableVariant } from '../list/adjustable.ts';
import type { PartScale } from './choice-input.ts';

/** Where a row's values come from. */
export type Role = 'as listed' | 'below' | 'exact' | 'nearest' | 'above' | 'about';

/** Values of the chosen parts with what they make of the circuit. */
export interface ChoiceRow {
  readonly role: Role;
  /** Base SI units, in the order of the parts. */
  readonly values: readonly number[];
  /** The goals' figures in their order; null where there is none. */
  readonly figures: readonly (number | null)[];
  /** What else moves; null where the circuit cannot be. */
  readonly moved: MovedFigures | null;
  /** Whether it is the best of the values that can be had. */
  readonly best: boolean;
}

/** The figures that goals judge by, the same one once. */
export function goalFigures(goals: readonly Goal[]): Figure[] {
  const figures = goals.flatMap((goal) =>
    goal.kind === 'figure' ? [goal.figure] : goal.limit ? [goal.limit.figure] : [],
  );
  return [...new Map(figures.map((figure) => [JSON.stringify(figure), figure])).values()];
}

/** A row for each value set, in the order given, none twice. */
export function choiceRows(
  wanted: readonly { readonly role: Role; readonly values: readonly number[] }[],
  best: readonly number[] | null,
  scales: readonly PartScale[],
  figures: readonly Figure[],
  variant: AdjustableVariant,
): ChoiceRow[] {
  const isBest = (values: readonly number[]): boolean => values.every((value, k) => value === best?.[k]);
  const all =
    best && !wanted.some(({ values }) => isBest(values))
      ? [...wanted, { role: 'about', values: best } as const]
      : wanted;
  const kept = new Map<string, (typeof all)[number]>();
  for (const row of all) {
    const key = row.values.map((value) => value.toPrecision(10)).join(' ');
    // an exact value that is also a preferred one is shown as the exact one
    const other = kept.get(key);
    if (!other || (row.role === 'exact' && other.role !== 'as listed')) kept.set(key, row);
  }
  return [...kept.values()].map(({ role, values }) => {
    const circuit = unlessImpossible(() => {
      const given = new Map(scales.map(({ part }, k) => [part.key, values[k] as number]));
      return new CircuitFigures(variant.circuitWith(role === 'as listed' ? new Map() : given).circuit);
    });
    return {
      role,
      values,
      figures: figures.map((figure) => circuit?.value(figure) ?? null),
      moved: circuit?.moved() ?? null,
      best: isBest(values),
    };
  });
}

/** The members on either side of a value. */
export function neighbours(value: number, members: readonly number[]): { below: number | null; above: number | null } {
  const same = (member: number): boolean => Math.abs(member - value) <= 1e-9 * value;
  return {
    below: members.filter((member) => member < value && !same(member)).at(-1) ?? null,
    above: members.find((member) => member > value && !same(member)) ?? null,
  };
}
