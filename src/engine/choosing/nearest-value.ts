import { lowest } from './crossing.ts';

/** A miss and an error this close are the same figure. */
const SAME_MISS = 1e-4;
/** Where there are no members, every so many of the points looked at stands for them. */
const EVERY = 4;

/**
 * The value whose figure comes nearest to a goal that none meets. The error says where a goal is met, not always how far
 * it is missed (a corner is judged by a level): where the two differ, the members' figures lead.
 */
export function nearestByFigure(
  values: readonly number[],
  nearest: number | null,
  known: ReadonlyMap<number, number>,
  missAt: (value: number) => number,
  errorAt: (value: number) => number,
): number | null {
  if (nearest === null) return null;
  const least = missAt(nearest);
  if (Math.abs(least - Math.abs(errorAt(nearest))) < SAME_MISS) return nearest;
  const looked = known.size > 0 ? [...known.keys()] : values.filter((_, k) => k % EVERY === 0);
  const lead = bestOf(looked, (value) => known.get(value) ?? missAt(value));
  if (lead === null) return nearest;
  const below = Math.max(...looked.filter((value) => value < lead), values[0] as number);
  const above = Math.min(...looked.filter((value) => value > lead), values.at(-1) as number);
  const between = values.filter((value) => value >= below && value <= above);
  const misses = between.map(missAt);
  const finite = misses.map((miss) => (Number.isFinite(miss) ? miss : Number.NaN));
  const closer = nearestOf(between, finite, missAt) ?? lead;
  return missAt(closer) < least || !Number.isFinite(least) ? closer : nearest;
}

/** The value of smallest error, looked at more closely between its neighbours. */
export function nearestOf(
  values: readonly number[],
  errors: readonly number[],
  errorAt: (value: number) => number,
): number | null {
  let at = -1;
  errors.forEach((error, k) => {
    if (Number.isFinite(error) && !(Math.abs(error) >= Math.abs(errors[at] ?? Number.POSITIVE_INFINITY))) at = k;
  });
  const value = values[at];
  if (value === undefined) return null;
  const [below, above] = [values[at - 1] ?? 0, values[at + 1] ?? 0];
  if (below === 0 || above === 0) return value;
  const closer = lowest((t) => Math.abs(errorAt(Math.exp(t))), Math.log(below), Math.log(above), 1e-6);
  return closer.value < Math.abs(errors[at] as number) ? Math.exp(closer.x) : value;
}

/** The member of smallest distance, the lower of two alike; null where all are infinitely far. */
export function bestOf(members: readonly number[], distance: (member: number) => number): number | null {
  let best: number | null = null;
  let least = Number.POSITIVE_INFINITY;
  for (const member of members) {
    const far = distance(member);
    if (far < least) [least, best] = [far, member];
  }
  return best;
}
