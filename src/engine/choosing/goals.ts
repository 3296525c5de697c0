import { HALF_POWER_DECIBELS } from '../circuits/response.ts';
import type { CircuitFigures, Figure } from './figures.ts';

/** A figure that is to have a value. */
export interface FigureGoal {
  readonly kind: 'figure';
  readonly figure: Figure;
  readonly target: number;
}

/** The most audio at 400 Hz, within a limit if there is one. */
export interface LoudestGoal {
  readonly kind: 'loudest';
  readonly limit: (Omit<FigureGoal, 'kind'> & { readonly side: 'above' | 'below' }) | null;
}

export type Goal = FigureGoal | LoudestGoal;

/**
 * How far a figure is from its target, signed, dB: decibels as they are, all else as the ratio's decibels. Null where
 * there is no figure.
 */
export function missDecibels(figure: Figure, value: number | null, target: number): number | null {
  if (value === null) return null;
  if (figure.kind === 'decibels') return value - target;
  return value > 0 ? 20 * Math.log10(value / target) : null;
}

/**
 * The same, but continuous in a part's value and quick: a corner is judged by the level at the target's frequency, so
 * that it does not end where the response no longer falls so far. NaN where there is no figure.
 */
export function searchError(figures: CircuitFigures, figure: Figure, target: number): number {
  if (figure.kind === 'high corner') return figures.decibels(target) - HALF_POWER_DECIBELS;
  // a lower corner is a higher level at the target
  if (figure.kind === 'low corner') return HALF_POWER_DECIBELS - figures.decibels(target);
  return missDecibels(figure, figures.value(figure), target) ?? Number.NaN;
}

/** Whether a limit is kept; a corner that is not reached lies beyond the range, as far as can be. */
export function keepsLimit(figures: CircuitFigures, limit: NonNullable<LoudestGoal['limit']>): boolean {
  const { figure, side, target } = limit;
  const value = figures.value(figure);
  if (value === null) {
    return (figure.kind === 'high corner' && side === 'above') || (figure.kind === 'low corner' && side === 'below');
  }
  return side === 'above' ? value >= target : value <= target;
}
