import type { DetectorCircuit } from '../circuits/circuit.ts';
import { type CostPart, costByPart } from '../circuits/cost-by-part.ts';
import { CircuitFigures, type Figure, unlessImpossible } from './figures.ts';
import { missDecibels, searchError } from './goals.ts';

/** A part that keeps the response from a goal. */
export interface Obstacle {
  readonly part: CostPart;
  /** What would come back at that frequency were the part ideal, dB; negative where it lifts what should fall. */
  readonly decibels: number;
}

/** Less than this is nobody's obstacle, dB: what a bench meter can just tell. */
const LEAST_DECIBELS = 0.3;

/**
 * The parts in the way of a goal of the response, the largest first, by what each costs at the goal's frequency.
 *
 * @param own  the part that is chosen, which is not counted
 * @returns    null for a figure that the cost by part says nothing of
 */
export function obstacles(
  figures: CircuitFigures,
  figure: Figure,
  target: number,
  own: CostPart | null,
): { readonly hertz: number; readonly parts: readonly Obstacle[] } | null {
  const hertz = figure.kind === 'decibels' ? figure.hertz : isCorner(figure) ? target : null;
  if (hertz === null) return null;
  // the lower corner's error is counted the other way round
  const short = (figure.kind === 'low corner' ? 1 : -1) * searchError(figures, figure, target) > 0;
  const cost = costByPart(figures.rest, [hertz]);
  const parts = (Object.keys(cost) as CostPart[])
    .filter((part) => part !== own)
    .map((part) => ({ part, decibels: cost[part][0] as number }))
    .filter(({ decibels }) => (short ? decibels : -decibels) > LEAST_DECIBELS)
    .sort((a, b) => Math.abs(b.decibels) - Math.abs(a.decibels));
  return { hertz, parts };
}

/** A change of another part, to be tried on a figure that the cost by part says nothing of. */
export interface Trial {
  readonly name: string;
  /** May raise InputError. */
  readonly circuit: () => DetectorCircuit;
}

/** The trial that brings a figure nearest to its target, or null where none helps. */
export function mostHelpful(
  figures: CircuitFigures,
  figure: Figure,
  target: number,
  trials: readonly Trial[],
): { readonly name: string; readonly value: number } | null {
  const far = (value: number | null): number =>
    Math.abs(missDecibels(figure, value, target) ?? Number.POSITIVE_INFINITY);
  let least = far(figures.value(figure)) - LEAST_DECIBELS;
  let best: { name: string; value: number } | null = null;
  for (const { name, circuit } of trials) {
    const value = unlessImpossible(() => new CircuitFigures(circuit()))?.value(figure) ?? null;
    if (value === null || !(far(value) < least)) continue;
    least = far(value);
    best = { name, value };
  }
  return best;
}

function isCorner(figure: Figure): boolean {
  return figure.kind === 'high corner' || figure.kind === 'low corner';
}
