import { solveReal } from '../circuits/dense-solve.ts';
import type { LinearSystem } from '../circuits/network.ts';
import { impedanceAt } from '../circuits/plate-network.ts';

/** Fractions of a step at which the two stages stand. */
export const STAGE_TIMES = [1 / 3, 1] as const;

/**
 * One step of the stage for E·dz/dt + F·z = b − B·i, worked out once for a step length and a network.
 *
 *   stage port volts  w = W·z + w0 − Z·i      (4: grid and plate at 1/3, grid and plate at 1)
 *   next state        z' = P·z + p0 − R·i     (i: port currents at both stages, in the order of w)
 *
 * Collocation at the two Radau IIA points: the port currents are the straight line through their values at 1/3 and 1 of
 * the step, and the network answers that line exactly. Where the network is pure capacitance this is the two-stage Radau
 * IIA rule itself (order 3, L-stable: a stiff circuit does not ring when the carrier steps); coils, windings and slow
 * capacitors then cost no accuracy at all, however near the step they resonate.
 *
 * Source of the Radau points: E. Hairer and G. Wanner, Solving Ordinary Differential Equations II, 2nd edition, 1996,
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
 * Parts of a step in which the network's own answer is worked out by the same rule, a multiple of 3. Its error falls as
 * the cube: below 1e-4 of the rule's own at a whole step.
 */
const PARTS = 24;
/** Frequencies from whose least conductance that kept with the port currents is taken, Hz. */
const ASIDE_HERTZ = [10_000, 20_000, 40_000] as const;

/**
 * @param system       the audio network
 * @param ports        nodes from which port currents are drawn
 * @param stepSeconds  above 0
 */
export function planStep(system: LinearSystem, ports: readonly number[], stepSeconds: number): StepPlan {
  const n = system.size;
  const portCount = ports.length;
  const drives = 2 * portCount;
  const columns = n + 1 + drives;
  const aside = conductancesAt(system, ports);
  const conductance = system.conductance.slice();
  ports.forEach((node, k) => {
    conductance[node * n + node] = (conductance[node * n + node] as number) - (aside[k] as number);
  });
  const part = planPart({ ...system, conductance }, ports, stepSeconds / PARTS);
  // the state as a sum of the step's first state, the constant and the stage currents
  let state = new Float64Array(n * columns);
  for (let r = 0; r < n; r++) state[r * columns + r] = 1;
  let third = state;
  for (let k = 0; k < PARTS; k++) {
    const next = new Float64Array(n * columns);
    const lines = STAGE_TIMES.map((c) => currentLine((k + c) / PARTS));
    for (let r = 0; r < n; r++) {
      for (let q = 0; q < n; q++) {
        const factor = part[r * columns + q] as number;
        if (factor === 0) continue;
        for (let c = 0; c < columns; c++) {
          next[r * columns + c] = (next[r * columns + c] as number) + factor * (state[q * columns + c] as number);
        }
      }
      next[r * columns + n] = (next[r * columns + n] as number) + (part[r * columns + n] as number);
      for (let sub = 0; sub < 2; sub++) {
        for (let port = 0; port < portCount; port++) {
          const effect = part[r * columns + n + 1 + sub * portCount + port] as number;
          for (let stage = 0; stage < 2; stage++) {
            const at = r * columns + n + 1 + stage * portCount + port;
            next[at] = (next[at] as number) + effect * ((lines[sub] as readonly number[])[stage] as number);
          }
        }
      }
    }
    state = next;
    if (k === PARTS / 3 - 1) third = next;
  }
  return recombined(n, ports, aside, third, state, columns);
}

/**
 * Puts the conductances that were kept aside back: the line then stands for the currents drawn with theirs included,
 * i + G·w, and w at the two points is known in terms of i.
 */
function recombined(
  n: number,
  ports: readonly number[],
  aside: Float64Array,
  third: Float64Array,
  end: Float64Array,
  columns: number,
): StepPlan {
  const count = ports.length;
  const drives = 2 * count;
  // (1 + Z·G)·w = W·z + w0 − Z·i, where third and end hold −Z in their last columns
  const matrix = new Float64Array(drives * drives);
  const right = new Float64Array(drives * columns);
  [third, end].forEach((from, stage) => {
    ports.forEach((node, port) => {
      const row = stage * count + port;
      for (let c = 0; c < columns; c++) right[row * columns + c] = from[node * columns + c] as number;
      for (let c = 0; c < drives; c++) {
        const ohms = -(from[node * columns + n + 1 + c] as number);
        matrix[row * drives + c] = (row === c ? 1 : 0) + ohms * (aside[c % count] as number);
      }
    });
  });
  if (!solveReal(matrix, drives, right, columns)) throw new Error('the port equations of the network are singular');
  const state = new Float64Array(n * columns);
  for (let r = 0; r < n; r++) {
    for (let c = 0; c < columns; c++) {
      let sum = end[r * columns + c] as number;
      for (let q = 0; q < drives; q++) {
        const effect = (end[r * columns + n + 1 + q] as number) * (aside[q % count] as number);
        sum += effect * (right[q * columns + c] as number);
      }
      state[r * columns + c] = sum;
    }
  }
  const pick = (from: Float64Array, rows: number, first: number, width: number, sign = 1): Float64Array => {
    const out = new Float64Array(rows * width);
    for (let r = 0; r < rows; r++) {
      for (let c = 0; c < width; c++) out[r * width + c] = sign * (from[r * columns + first + c] as number);
    }
    return out;
  };
  return {
    size: n,
    stateFromState: pick(state, n, 0, n),
    stateConstant: pick(state, n, n, 1),
    stateFromCurrent: pick(state, n, n + 1, drives, -1),
    portFromState: pick(right, drives, 0, n),
    portConstant: pick(right, drives, n, 1),
    portFromCurrent: pick(right, drives, n + 1, drives, -1),
  };
}

/**
 * Conductance that each port's node meets at the top of the audio band and above, S. A line stands better for the net
 * current of a resistance and the tube together than for the tube's alone, which is why it goes with the port currents;
 * the least of three frequencies passes over resonances, whose conductance is no resistance.
 */
function conductancesAt(system: LinearSystem, ports: readonly number[]): Float64Array {
  return Float64Array.from(ports, (node) => {
    const siemens = ASIDE_HERTZ.map((hertz) => {
      const z = impedanceAt(system, node, hertz);
      return z.re / (z.re * z.re + z.im * z.im);
    });
    return Math.max(Math.min(...siemens), 0);
  });
}

/** Weights of the currents at 1/3 and 1 for the straight line through them at a fraction of the step. */
function currentLine(fraction: number): readonly [number, number] {
  return [1.5 * (1 - fraction), 1.5 * fraction - 0.5];
}

/** One Radau IIA step of the network alone: next state from state (n), constant (1) and port currents at its stages. */
function planPart(system: LinearSystem, ports: readonly number[], seconds: number): Float64Array {
  const n = system.size;
  const both = 2 * n;
  const columns = n + 1 + 2 * ports.length;
  const matrix = new Float64Array(both * both);
  const right = new Float64Array(both * columns);
  for (let si = 0; si < 2; si++) {
    for (let sj = 0; sj < 2; sj++) {
      const a = seconds * (RULE[2 * si + sj] as number);
      for (let r = 0; r < n; r++) {
        const row = si * n + r;
        for (let c = 0; c < n; c++) {
          const f = a * (system.conductance[r * n + c] as number);
          matrix[row * both + sj * n + c] = f + (si === sj ? (system.storage[r * n + c] as number) : 0);
        }
        right[row * columns + n] = (right[row * columns + n] as number) + a * (system.drive[r] as number);
      }
      ports.forEach((node, k) => {
        right[(si * n + node) * columns + n + 1 + sj * ports.length + k] = -a;
      });
    }
    for (let r = 0; r < n; r++) {
      for (let c = 0; c < n; c++) right[(si * n + r) * columns + c] = system.storage[r * n + c] as number;
    }
  }
  if (!solveReal(matrix, both, right, columns)) throw new Error('the step equations of the network are singular');
  return right.slice(n * columns);
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
