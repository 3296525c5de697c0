import { type Fault, InputError } from '../errors.ts';
import { plateAmps } from './laws.ts';
import type { TubeLaw } from './tube.ts';

/** One point read from a plate-characteristic curve. */
export interface CurvePoint {
  readonly plateVolts: number;
  readonly gridVolts: number;
  /** A, 0 and up: points at cut-off are worth having. */
  readonly plateAmps: number;
}

export interface CurveFit {
  readonly law: TubeLaw;
  /** Which numbers were freed; the others are those of the start. */
  readonly freed: readonly ('G' | 'phi' | 'gamma' | 'C')[];
  /** Root mean square of the misses, each over its reading error. About 1 is as good as the curve was read. */
  readonly rmsReadingErrors: number;
  readonly iterations: number;
}

export interface CurveFitOptions {
  /** Reading error of a current, A: half a small square of the printed grid. Default: 1 % of the largest current. */
  readonly readingAmps?: number;
  readonly where?: string;
}

/** Reading error that grows with the current, as a part of it: the steepness of the curves against their line width. */
const RELATIVE_READING = 0.03;
/** Where exponent and sharpness of a receiving triode lie; a fit that leaves this has run away. */
const GAMMA_RANGE = [1, 2.5] as const;
const C_RANGE = [0.5, 50] as const;

/**
 * Refines a law on points of published curves. Two or three points set G and phi alone; four or more also free gamma and C,
 * which two or three rows cannot hold (they run away). Mu and the grid law are the start's.
 *
 * Least squares by the Levenberg–Marquardt method with Marquardt's scaling (D. W. Marquardt, J. SIAM 11, 1963, from
 * memory), logarithms of G, gamma and C as unknowns so that none can turn negative, misses over reading errors.
 *
 * @param points  2 or more
 * @param start   the law of the tube's published row
 * @throws InputError `too-few-points`, `point-not-valid`, `curve-points-undetermined`
 */
export function lawFromCurvePoints(
  points: readonly CurvePoint[],
  start: TubeLaw,
  options: CurveFitOptions = {},
): CurveFit {
  const where = options.where ?? 'curve points';
  refusePoints(points, where);
  const reading = options.readingAmps ?? 0.01 * Math.max(...points.map((p) => p.plateAmps));
  const free = points.length >= 4 ? 4 : 2;
  const lawAt = (x: Float64Array): TubeLaw => ({
    ...start,
    G: Math.exp(x[0]!),
    phi: x[1]!,
    gamma: free > 2 ? Math.exp(x[2]!) : start.gamma,
    C: free > 2 ? Math.exp(x[3]!) : start.C,
  });
  const misses = (x: Float64Array): Float64Array => {
    const law = lawAt(x);
    return Float64Array.from(
      points,
      (p) =>
        (plateAmps(law, p.gridVolts, p.plateVolts) - p.plateAmps) / Math.hypot(reading, RELATIVE_READING * p.plateAmps),
    );
  };
  const first = [Math.log(start.G), start.phi, Math.log(start.gamma), Math.log(start.C)].slice(0, free);
  const { solution, iterations } = levenbergMarquardt(misses, Float64Array.from(first));
  const law = lawAt(solution);
  const inside = (value: number, [least, most]: readonly [number, number]): boolean => value > least && value < most;
  if (!inside(law.gamma, GAMMA_RANGE) || !inside(law.C, C_RANGE) || !Number.isFinite(law.G) || !(law.G > 0)) {
    throw new InputError({
      code: 'curve-points-undetermined',
      where,
      got: `exponent ${law.gamma.toPrecision(3)}, sharpness ${law.C.toPrecision(3)} per volt`,
      expected: 'points that settle on an exponent of 1 to 2.5 and a sharpness of 0.5 to 50 per volt',
      hint: 'add points near cut-off and at several grid voltages, and look for a misread one',
    });
  }
  return {
    law,
    freed: free > 2 ? ['G', 'phi', 'gamma', 'C'] : ['G', 'phi'],
    rmsReadingErrors: Math.sqrt(sumOfSquares(misses(solution)) / points.length),
    iterations,
  };
}

function refusePoints(points: readonly CurvePoint[], where: string): void {
  const faults: Fault[] = [];
  if (points.length < 2) {
    faults.push({ code: 'too-few-points', where, got: `${points.length}`, expected: '2 points or more' });
  }
  points.forEach((p, index) => {
    if (p.plateVolts > 0 && p.plateAmps >= 0 && Number.isFinite(p.plateVolts + p.gridVolts + p.plateAmps)) return;
    faults.push({
      code: 'point-not-valid',
      where: `${where} ${index + 1}`,
      got: `${p.plateVolts} V, ${p.gridVolts} V, ${p.plateAmps} A`,
      expected: 'plate volts above 0 and a plate current of 0 or more',
    });
  });
  if (points.length >= 2 && !points.some((p) => p.plateAmps > 0)) {
    faults.push({ code: 'point-not-valid', where, got: 'no current', expected: 'at least one point with current' });
  }
  if (faults.length > 0) throw new InputError(faults);
}

/**
 * Least squares of `misses(x)` from `x`, by damped Gauss–Newton steps; the damping multiplies the diagonal of JᵀJ, so
 * unknowns of different size need no scaling by hand. Stops when a step changes the sum by less than 1e-12 of it.
 */
function levenbergMarquardt(
  misses: (x: Float64Array) => Float64Array,
  x: Float64Array,
): { solution: Float64Array; iterations: number } {
  const n = x.length;
  let current = x;
  let residual = misses(current);
  let sum = sumOfSquares(residual);
  let damping = 1e-2;
  for (let iteration = 1; iteration <= 200; iteration++) {
    const jacobian = Array.from({ length: n }, (_, k) => slope(misses, current, k));
    let improved = false;
    for (let attempt = 0; attempt < 30 && !improved; attempt++) {
      const matrix = jacobian.map((a, i) =>
        Float64Array.from(jacobian, (b, j) => dot(a, b) * (i === j ? 1 + damping : 1)),
      );
      const step = solvePositive(
        matrix,
        Float64Array.from(jacobian, (a) => -dot(a, residual)),
      );
      const trial = step === null ? null : current.map((value, k) => value + step[k]!);
      const trialResidual = trial === null ? null : misses(trial);
      const trialSum = trialResidual === null ? Number.NaN : sumOfSquares(trialResidual);
      if (trial !== null && trialResidual !== null && trialSum < sum) {
        const gain = (sum - trialSum) / sum;
        [current, residual, sum] = [trial, trialResidual, trialSum];
        damping = Math.max(1e-12, damping / 10);
        improved = true;
        if (gain < 1e-12) return { solution: current, iterations: iteration };
      } else damping *= 10;
    }
    if (!improved) return { solution: current, iterations: iteration };
  }
  return { solution: current, iterations: 200 };
}

/** Central difference of every miss by unknown `k`. The step balances rounding (1e-16/h) against curvature (h²). */
function slope(misses: (x: Float64Array) => Float64Array, x: Float64Array, k: number): Float64Array {
  const h = 1e-5 * Math.max(1, Math.abs(x[k]!));
  const up = misses(x.map((value, i) => (i === k ? value + h : value)));
  const down = misses(x.map((value, i) => (i === k ? value - h : value)));
  return up.map((value, i) => (value - down[i]!) / (2 * h));
}

/** Cholesky solution of a small positive-definite system, null when it is not positive to working precision. */
function solvePositive(a: Float64Array[], b: Float64Array): Float64Array | null {
  const n = b.length;
  for (let i = 0; i < n; i++) {
    for (let j = 0; j <= i; j++) {
      let value = a[i]![j]!;
      for (let k = 0; k < j; k++) value -= a[i]![k]! * a[j]![k]!;
      if (i === j) {
        if (!(value > 0)) return null;
        a[i]![i] = Math.sqrt(value);
      } else a[i]![j] = value / a[j]![j]!;
    }
  }
  const y = Float64Array.from(b);
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < i; k++) y[i] = y[i]! - a[i]![k]! * y[k]!;
    y[i] = y[i]! / a[i]![i]!;
  }
  for (let i = n - 1; i >= 0; i--) {
    for (let k = i + 1; k < n; k++) y[i] = y[i]! - a[k]![i]! * y[k]!;
    y[i] = y[i]! / a[i]![i]!;
  }
  return y;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}

function sumOfSquares(a: Float64Array): number {
  return dot(a, a);
}
