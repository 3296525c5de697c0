import { solveReal } from '../circuits/dense-solve.ts';
import type { LinearSystem } from '../circuits/network.ts';

/** Fractions of a step at which the two stages stand. */
export const STAGE_TIMES = [1 / 3, 1] as const;

/**
 * One step of the two-stage Radau IIA rule (order 3, L-stable: a stiff circuit does not ring when the carrier steps)
 * for E·dz/dt + F·z = b − B·i, worked out once for a step length and a network.
 *
 *   stage port volts  w = W·z + w0 − Z·i      (4: grid and plate at 1/3, grid and plate at 1)
 *   next state        z' = P·z + p0 − R·i     (i: port currents at both stages, in the order of w)
 *
 * Source of the rule: E. Hairer and G. Wanner, Solving Ordinary Differential Equations II, 2nd edition, 1996,
 * section IV.5, table 5.5 (from memory); checked by its order and by a linear network's exact response.
 */
export interface StepPlan {
  readonly size: number;
  readonly stateFromState: Float64Array;
  readonly stateConstant: Float64Array;
  readonly stateFromCurrent: Float64Array;
  readonly portFromState: Float64Array;
  readonly portConstant: Float64Array;
  readonly portFromCurrent: Float64Array;
}

const RULE = [5 / 12, -1 / 12, 3 / 4, 1 / 4] as const;

/**
 * @param system       the audio network
 * @param ports        nodes from which port currents are drawn
 * @param stepSeconds  above 0
 */
export function planStep(system: LinearSystem, ports: readonly number[], stepSeconds: number): StepPlan {
  const n = system.size;
  const both = 2 * n;
  const portCount = ports.length;
  const drives = 2 * portCount;
  const columns = n + 1 + drives;
  const matrix = new Float64Array(both * both);
  const right = new Float64Array(both * columns);
  for (let si = 0; si < 2; si++) {
    for (let sj = 0; sj < 2; sj++) {
      const a = stepSeconds * (RULE[2 * si + sj] as number);
      for (let r = 0; r < n; r++) {
        const row = si * n + r;
        for (let c = 0; c < n; c++) {
          const f = a * (system.conductance[r * n + c] as number);
          matrix[row * both + sj * n + c] = f + (si === sj ? (system.storage[r * n + c] as number) : 0);
        }
        right[row * columns + n] = (right[row * columns + n] as number) + a * (system.drive[r] as number);
      }
      ports.forEach((node, k) => {
        right[(si * n + node) * columns + n + 1 + sj * portCount + k] = a;
      });
    }
    for (let r = 0; r < n; r++) {
      for (let c = 0; c < n; c++) right[(si * n + r) * columns + c] = system.storage[r * n + c] as number;
    }
  }
  if (!solveReal(matrix, both, right, columns)) throw new Error('the step equations of the network are singular');
  const pick = (rows: readonly number[], from: number, count: number): Float64Array => {
    const out = new Float64Array(rows.length * count);
    rows.forEach((row, r) => {
      for (let c = 0; c < count; c++) out[r * count + c] = right[row * columns + from + c] as number;
    });
    return out;
  };
  const last = Array.from({ length: n }, (_, r) => n + r);
  const portRows = [...ports, ...ports.map((node) => n + node)];
  return {
    size: n,
    stateFromState: pick(last, 0, n),
    stateConstant: pick(last, n, 1),
    stateFromCurrent: pick(last, n + 1, drives),
    portFromState: pick(portRows, 0, n),
    portConstant: pick(portRows, n, 1),
    portFromCurrent: pick(portRows, n + 1, drives),
  };
}

/**
 * Weights that carry the last four stage points (at 0, −2/3, −1, −5/3 of a step) on to the next two (1/3 and 1) by
 * the cubic through them; row-major 2 × 4.
 */
export function forecastWeights(): Float64Array {
  const past = [0, -2 / 3, -1, -5 / 3];
  const weights = new Float64Array(8);
  STAGE_TIMES.forEach((t, row) => {
    past.forEach((tj, j) => {
      let w = 1;
      past.forEach((tk, k) => {
        if (k !== j) w *= (t - tk) / (tj - tk);
      });
      weights[4 * row + j] = w;
    });
  });
  return weights;
}
