import { solveReal } from '../circuits/dense-solve.ts';
import type { Shares } from './draws.ts';
import { varianceOf } from './statistics.ts';

/** How much of a figure's variance each part carries by itself. */
export interface VarianceShares {
  /** One a part, 0 to 1, as they stand in the row of parts. */
  readonly shares: readonly number[];
  /** What no part carries by itself: parts acting together, and bends sharper than a parabola. */
  readonly together: number;
}

/** Circuits a term of the fit asks for: with fewer the fit follows the draws instead of the parts. */
const RUNS_PER_TERM = 8;

/**
 * First-order shares of a figure's variance by least squares over the random circuits. The figure is fitted with a
 * straight line and, given enough circuits, a parabola in each part's place within its tolerance; a part's share is the
 * variance of its own terms over the circuits, over that of the figure. The parts are drawn independently, so the variances
 * of their terms add.
 *
 * Source of the idea: I. M. Sobol', Sensitivity estimates for nonlinear mathematical models, 1993 (from memory); of the
 * estimate by a fit: B. Sudret, Reliab. Eng. Syst. Saf. 93, 2008 (from memory).
 *
 * @returns null where the figure does not vary, or there are too few circuits for the parts
 */
export function varianceShares(shares: Shares, values: readonly number[]): VarianceShares | null {
  const parts = shares[0]?.length ?? 0;
  const runs = values.length;
  const degrees = runs >= RUNS_PER_TERM * (2 * parts + 1) ? 2 : 1;
  const total = varianceOf(values);
  const scale = values.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
  if (parts === 0 || runs < RUNS_PER_TERM * (parts + 1) || !(total > (1e-12 * scale) ** 2)) return null;
  const terms = 1 + degrees * parts;
  const normal = new Float64Array(terms * terms);
  const right = new Float64Array(terms);
  const row = new Float64Array(terms);
  const centre = values.reduce((sum, value) => sum + value, 0) / runs;
  values.forEach((value, run) => {
    row[0] = 1;
    (shares[run] as readonly number[]).forEach((share, k) => {
      const x = 2 * share - 1;
      row[1 + degrees * k] = x;
      if (degrees === 2) row[2 + degrees * k] = 1.5 * x * x - 0.5;
    });
    for (let i = 0; i < terms; i++) {
      right[i] = (right[i] as number) + (row[i] as number) * (value - centre);
      for (let j = 0; j < terms; j++) {
        normal[i * terms + j] = (normal[i * terms + j] as number) + (row[i] as number) * (row[j] as number);
      }
    }
  });
  if (!solveReal(normal, terms, right, 1)) return null;
  const carried = Array.from({ length: parts }, (_, k) => {
    const own = shares.map((places) => {
      const x = 2 * (places[k] as number) - 1;
      const line = (right[1 + degrees * k] as number) * x;
      return degrees === 2 ? line + (right[2 + degrees * k] as number) * (1.5 * x * x - 0.5) : line;
    });
    return varianceOf(own) / total;
  });
  // chance in the draws can take the sum a little over the whole
  const sum = carried.reduce((all, one) => all + one, 0);
  const shown = sum > 1 ? carried.map((one) => one / sum) : carried;
  return { shares: shown, together: Math.max(0, 1 - sum) };
}
