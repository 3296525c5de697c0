import { solveReal } from '../circuits/dense-solve.ts';

/** Numbers to be made small by moving a few others. */
export interface Residuals {
  /** The residuals at a place, or null where there are none (a circuit that cannot be). */
  readonly at: (place: Float64Array) => Float64Array | null;
  /** The box in which places are sought. */
  readonly low: Float64Array;
  readonly high: Float64Array;
}

export interface Settled {
  readonly place: Float64Array;
  readonly residuals: Float64Array;
  /** The whole sum of squares, not half of it. */
  readonly sum: number;
}

/** Step of the numerical slopes: far above the rounding of the residuals, far below the bend of any response. */
const SLOPE_STEP = 1e-4;
const MOST_ROUNDS = 60;

/** Slopes of every residual by every coordinate, row a residual: two-sided, one-sided at the box; null where there are none. */
export function slopesAt({ at, low, high }: Residuals, place: Float64Array, here: Float64Array): Float64Array | null {
  const p = place.length;
  const slopes = new Float64Array(here.length * p);
  for (let c = 0; c < p; c++) {
    const beside = (step: number): { at: number; values: Float64Array } | null => {
      const moved = place.slice();
      moved[c] = (place[c] as number) + step;
      if ((moved[c] as number) > (high[c] as number) || (moved[c] as number) < (low[c] as number)) return null;
      const values = at(moved);
      return values ? { at: moved[c] as number, values } : null;
    };
    const stays = { at: place[c] as number, values: here };
    const above = beside(SLOPE_STEP) ?? stays;
    const below = beside(-SLOPE_STEP) ?? stays;
    if (above === below) return null;
    for (let r = 0; r < here.length; r++) {
      slopes[r * p + c] = ((above.values[r] as number) - (below.values[r] as number)) / (above.at - below.at);
    }
  }
  return slopes;
}

/**
 * The nearest place of least squares: steps between those of Newton and steepest descent, shortened while they fail
 * (K. Levenberg, Quart. Appl. Math. 2, 1944; D. W. Marquardt, J. SIAM 11, 1963; both from memory).
 *
 * @param arrived  ends the search before a round, where this place is known already or leads nowhere
 * @param enough   ends it where a round takes off no larger part of the sum
 * @returns        null where there are no residuals at the start
 */
export function leastSquares(
  residuals: Residuals,
  start: Float64Array,
  arrived: (place: Float64Array, sum: number, round: number) => boolean = () => false,
  enough = 1e-10,
): Settled | null {
  const { at, low, high } = residuals;
  const p = start.length;
  let place: Float64Array = start.map((x, c) => Math.min(Math.max(x, low[c] as number), high[c] as number));
  const first = at(place);
  if (!first) return null;
  let here = first;
  let sum = squares(here);
  let damping = 1e-3;
  for (let round = 0; round < MOST_ROUNDS && sum > 0; round++) {
    if (arrived(place, sum, round)) break;
    const slopes = slopesAt(residuals, place, here);
    if (!slopes) break;
    let better: { place: Float64Array; here: Float64Array; sum: number; moved: number } | null = null;
    while (!better && damping < 1e12) {
      const step = dampedStep(slopes, here, p, damping);
      const trial = place.map((x, c) => Math.min(Math.max(x - (step?.[c] ?? 0), low[c] as number), high[c] as number));
      const values = step ? at(trial) : null;
      const next = values ? squares(values) : Number.POSITIVE_INFINITY;
      if (values && next < sum) {
        const moved = Math.max(...trial.map((x, c) => Math.abs(x - (place[c] as number))));
        better = { place: trial, here: values, sum: next, moved };
      } else damping *= damping < 1e-6 ? 100 : 8;
    }
    if (!better) break;
    const gained = (sum - better.sum) / sum;
    ({ place, here, sum } = better);
    damping = Math.max(damping / 8, 1e-12);
    if (gained < enough && (better.moved < 1e-6 || enough > 1e-6)) break;
  }
  return { place, residuals: here, sum };
}

/** JᵀJ of slopes by row, p × p. */
export function normalMatrix(slopes: Float64Array, p: number): Float64Array {
  const normal = new Float64Array(p * p);
  for (let o = 0; o < slopes.length; o += p) {
    for (let a = 0; a < p; a++) {
      for (let b = 0; b < p; b++) {
        normal[a * p + b] = (normal[a * p + b] as number) + (slopes[o + a] as number) * (slopes[o + b] as number);
      }
    }
  }
  return normal;
}

/** The inverse of a p × p matrix, or null where it has none. */
export function inverseOf(matrix: Float64Array, p: number): Float64Array | null {
  const inverse = new Float64Array(p * p);
  for (let a = 0; a < p; a++) inverse[a * p + a] = 1;
  return solveReal(matrix.slice(), p, inverse, p) && inverse.every(Number.isFinite) ? inverse : null;
}

function dampedStep(slopes: Float64Array, here: Float64Array, p: number, damping: number): Float64Array | null {
  const normal = normalMatrix(slopes, p);
  const step = new Float64Array(p);
  for (let c = 0; c < p; c++) {
    // a coordinate that moves nothing stays
    normal[c * p + c] = (normal[c * p + c] as number) * (1 + damping) || 1;
    for (let r = 0; r < here.length; r++) {
      step[c] = (step[c] as number) + (slopes[r * p + c] as number) * (here[r] as number);
    }
  }
  return solveReal(normal, p, step, 1) ? step : null;
}

function squares(values: Float64Array): number {
  let sum = 0;
  for (const value of values) sum += value * value;
  return sum;
}
