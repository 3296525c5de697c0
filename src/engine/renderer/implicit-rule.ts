import { solveReal } from '../circuits/dense-solve.ts';
import type { LinearSystem } from '../circuits/network.ts';
import { impedanceAt, type Probe } from '../circuits/plate-network.ts';

/** Fractions of a step at which the three stages stand: the Radau points. */
export const STAGE_TIMES = [(4 - Math.sqrt(6)) / 10, (4 + Math.sqrt(6)) / 10, 1] as const;
export const STAGES = STAGE_TIMES.length;
const PORTS = 2;
const DRIVES = STAGES * PORTS;

/**
 * One step of the stage for E·dz/dt + F·z = b − B·i, worked out once for a step length and a network.
 *
 *   stage port volts    w = W·z + w0 − Z·i      (6: grid and plate at each of the three stages)
 *   next state          z' = P·z + p0 − R·i     (i: port currents at the stages, in the order of w)
 *   output at half      v  = H·z + h0 − h·i
 *
 * Collocation at the Radau points: the port currents are the parabola through their values at the three stages, and the
 * network answers that parabola exactly. Where the network is pure capacitance this is the three-stage Radau IIA rule
 * itself (order 5, L-stable: a stiff circuit does not ring when the carrier steps); coils, windings and slow capacitors
 * then cost no accuracy at all, however near the step they resonate.
 *
 * Source of the Radau points: E. Hairer and G. Wanner, Solving Ordinary Differential Equations II, 2nd edition, 1996,
 * section IV.5, table 5.6 (from memory); checked by its order and by a linear network's exact response.
 */
export interface StepPlan {
  readonly size: number;
  readonly stateFromState: Float64Array;
  readonly stateConstant: Float64Array;
  readonly stateFromCurrent: Float64Array;
  readonly portFromState: Float64Array;
  readonly portConstant: Float64Array;
  readonly portFromCurrent: Float64Array;
  readonly halfFromState: Float64Array;
  readonly halfConstant: number;
  readonly halfFromCurrent: Float64Array;
}

/** The two-stage Radau IIA rule, with which the network's own answer is worked out between the points. */
const INNER_TIMES = [1 / 3, 1] as const;
const INNER_RULE = [5 / 12, -1 / 12, 3 / 4, 1 / 4] as const;
/** Parts between two points; the inner rule's error falls as the cube of their number and is far below the rule's own. */
const PARTS = 10;
/** Frequencies from whose least conductance that kept with the port currents is taken, Hz. */
const ASIDE_HERTZ = [10_000, 20_000, 40_000] as const;

/**
 * @param system       the audio network
 * @param ports        nodes of grid and plate
 * @param heard        what is read at half a step besides the state
 * @param stepSeconds  above 0
 */
export function planStep(
  system: LinearSystem,
  ports: readonly [number, number],
  heard: Probe,
  stepSeconds: number,
): StepPlan {
  const n = system.size;
  const columns = n + 1 + DRIVES;
  const aside = conductancesAt(system, ports);
  const conductance = system.conductance.slice();
  ports.forEach((node, k) => {
    conductance[node * n + node] = (conductance[node * n + node] as number) - (aside[k] as number);
  });
  const network = { ...system, conductance };
  // the state as a sum of the step's first state, the constant and the stage currents
  let state = new Float64Array(n * columns);
  for (let r = 0; r < n; r++) state[r * columns + r] = 1;
  const points: Float64Array[] = [];
  let half = state;
  let from = 0;
  for (const to of [STAGE_TIMES[0], 0.5, STAGE_TIMES[1], 1]) {
    const part = planPart(network, ports, (stepSeconds * (to - from)) / PARTS);
    for (let k = 0; k < PARTS; k++) {
      const fractions = INNER_TIMES.map((c) => from + ((to - from) * (k + c)) / PARTS);
      state = carried(state, part, n, fractions.map(currentParabola));
    }
    if (to === 0.5) half = state;
    else points.push(state);
    from = to;
  }
  return recombined(n, ports, aside, points, half, heard);
}

/** A state, as a sum of first state, constant and stage currents, one part further. */
function carried(
  state: Float64Array,
  part: Float64Array,
  n: number,
  parabolas: readonly (readonly number[])[],
): Float64Array<ArrayBuffer> {
  const columns = n + 1 + DRIVES;
  const partColumns = n + 1 + INNER_TIMES.length * PORTS;
  const next = new Float64Array(n * columns);
  for (let r = 0; r < n; r++) {
    for (let q = 0; q < n; q++) {
      const factor = part[r * partColumns + q] as number;
      if (factor === 0) continue;
      for (let c = 0; c < columns; c++) {
        next[r * columns + c] = (next[r * columns + c] as number) + factor * (state[q * columns + c] as number);
      }
    }
    next[r * columns + n] = (next[r * columns + n] as number) + (part[r * partColumns + n] as number);
    parabolas.forEach((weights, inner) => {
      for (let port = 0; port < PORTS; port++) {
        const effect = part[r * partColumns + n + 1 + inner * PORTS + port] as number;
        weights.forEach((weight, stage) => {
          const at = r * columns + n + 1 + stage * PORTS + port;
          next[at] = (next[at] as number) + effect * weight;
        });
      }
    });
  }
  return next;
}

/**
 * Puts the conductances that were kept aside back: the parabola then stands for the currents drawn with theirs included,
 * i + G·w, and w at the points is known in terms of i.
 */
function recombined(
  n: number,
  ports: readonly number[],
  aside: Float64Array,
  points: readonly Float64Array[],
  half: Float64Array,
  heard: Probe,
): StepPlan {
  const columns = n + 1 + DRIVES;
  // (1 + Z·G)·w = W·z + w0 − Z·i, where the points hold −Z in their last columns
  const matrix = new Float64Array(DRIVES * DRIVES);
  const right = new Float64Array(DRIVES * columns);
  points.forEach((from, stage) => {
    ports.forEach((node, port) => {
      const row = stage * PORTS + port;
      for (let c = 0; c < columns; c++) right[row * columns + c] = from[node * columns + c] as number;
      for (let c = 0; c < DRIVES; c++) {
        const ohms = -(from[node * columns + n + 1 + c] as number);
        matrix[row * DRIVES + c] = (row === c ? 1 : 0) + ohms * (aside[c % PORTS] as number);
      }
    });
  });
  if (!solveReal(matrix, DRIVES, right, columns)) throw new Error('the port equations of the network are singular');
  const withAside = (from: Float64Array, row: number): Float64Array =>
    Float64Array.from({ length: columns }, (_, c) => {
      let sum = from[row * columns + c] as number;
      for (let q = 0; q < DRIVES; q++) {
        const effect = (from[row * columns + n + 1 + q] as number) * (aside[q % PORTS] as number);
        sum += effect * (right[q * columns + c] as number);
      }
      return sum;
    });
  const end = points[points.length - 1] as Float64Array;
  const state = Array.from({ length: n }, (_, r) => withAside(end, r));
  const rows = Array.from({ length: DRIVES }, (_, r) => right.slice(r * columns, (r + 1) * columns));
  const middle = withAside(half, heard.index);
  const part = (from: readonly Float64Array[], first: number, width: number, sign = 1): Float64Array =>
    Float64Array.from({ length: from.length * width }, (_, at) => {
      const row = from[Math.floor(at / width)] as Float64Array;
      return sign * (row[first + (at % width)] as number);
    });
  return {
    size: n,
    stateFromState: part(state, 0, n),
    stateConstant: part(state, n, 1),
    stateFromCurrent: part(state, n + 1, DRIVES, -1),
    portFromState: part(rows, 0, n),
    portConstant: part(rows, n, 1),
    portFromCurrent: part(rows, n + 1, DRIVES, -1),
    halfFromState: part([middle], 0, n),
    halfConstant: middle[n] as number,
    halfFromCurrent: part([middle], n + 1, DRIVES, -1),
  };
}

/**
 * Conductance that each port's node meets at the top of the audio band and above, S. A parabola stands better for the net
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

/** Weights of the currents at the stages for the parabola through them, at a fraction of the step. */
function currentParabola(fraction: number): number[] {
  return lagrangeWeights(STAGE_TIMES, fraction);
}

/** Weights of values at `times` for the polynomial through them at `t`. */
export function lagrangeWeights(times: readonly number[], t: number): number[] {
  return times.map((tj, j) =>
    times.reduce((product, tk, k) => (k === j ? product : (product * (t - tk)) / (tj - tk)), 1),
  );
}

/** One inner step of the network alone: next state from state (n), constant (1) and port currents at its two stages. */
function planPart(system: LinearSystem, ports: readonly number[], seconds: number): Float64Array {
  const n = system.size;
  const both = 2 * n;
  const columns = n + 1 + 2 * ports.length;
  const matrix = new Float64Array(both * both);
  const right = new Float64Array(both * columns);
  for (let si = 0; si < 2; si++) {
    for (let sj = 0; sj < 2; sj++) {
      const a = seconds * (INNER_RULE[2 * si + sj] as number);
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

/** Past stage points that a forecast is drawn from: the last step's three, newest first, and the end of the one before. */
export const PAST_TIMES = [0, STAGE_TIMES[1] - 1, STAGE_TIMES[0] - 1, -1] as const;

/** Weights that carry the past stage points on to the next three by the polynomial through them; a stage a row. */
export function forecastWeights(): Float64Array {
  return Float64Array.from(STAGE_TIMES.flatMap((t) => lagrangeWeights(PAST_TIMES, t)));
}
