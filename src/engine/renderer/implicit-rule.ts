import { solveReal } from '../circuits/dense-solve.ts';
import type { LinearSystem } from '../circuits/network.ts';
import type { Probe } from '../circuits/plate-network.ts';

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
 * The three-stage Radau IIA rule on the whole network with the tube's currents: order 5, and L-stable, so that a stiff
 * circuit does not ring when the carrier steps, nor a choke or a winding that resonates far above the steps. A network
 * answered exactly between the stages would be closer to a resonance near 10 kHz (0.03 dB is what this rule takes of the
 * sharpest), but one above some 30 kHz then grows without bound: the tube, which alone damps it, is met at the stages only.
 *
 * Source of the Radau points: E. Hairer and G. Wanner, Solving Ordinary Differential Equations II, 2nd edition, 1996,
 * section IV.5, table 5.6 (from memory); checked by its order.
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

/** Weights of the slopes at the stages for the way from the step's start to each stage; a stage a row. */
const RULE = STAGE_TIMES.map((end) => STAGE_TIMES.map((_, j) => stageIntegral(j, end)));

/** Integral from 0 to `end` of the polynomial that is 1 at one stage and 0 at the other two. */
function stageIntegral(stage: number, end: number): number {
  const own = STAGE_TIMES[stage] as number;
  const [a, b] = STAGE_TIMES.filter((_, k) => k !== stage) as [number, number];
  return (end * (end * (end / 3 - (a + b) / 2) + a * b)) / ((own - a) * (own - b));
}

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
  const { size: n, storage, conductance, drive } = system;
  const columns = n + 1 + DRIVES;
  const all = STAGES * n;
  // E·Z_i + h·Σ a_ij·F·Z_j = E·z + h·Σ a_ij·(b − B·i_j): the state at the stages from the step's first state, the constant
  // and the port currents
  const matrix = new Float64Array(all * all);
  const stages = new Float64Array(all * columns);
  for (let si = 0; si < STAGES; si++) {
    for (let r = 0; r < n; r++) {
      const row = si * n + r;
      for (let c = 0; c < n; c++) stages[row * columns + c] = storage[r * n + c] as number;
    }
    for (let sj = 0; sj < STAGES; sj++) {
      const a = stepSeconds * ((RULE[si] as readonly number[])[sj] as number);
      for (let r = 0; r < n; r++) {
        const row = si * n + r;
        for (let c = 0; c < n; c++) {
          const f = a * (conductance[r * n + c] as number);
          matrix[row * all + sj * n + c] = f + (si === sj ? (storage[r * n + c] as number) : 0);
        }
        stages[row * columns + n] = (stages[row * columns + n] as number) + a * (drive[r] as number);
      }
      ports.forEach((node, port) => {
        stages[(si * n + node) * columns + n + 1 + sj * PORTS + port] = -a;
      });
    }
  }
  if (!solveReal(matrix, all, stages, columns)) throw new Error('the step equations of the network are singular');
  const row = (stage: number, unknown: number): Float64Array => {
    const from = (stage * n + unknown) * columns;
    return stages.subarray(from, from + columns);
  };
  const state = Array.from({ length: n }, (_, r) => row(STAGES - 1, r));
  const rows = STAGE_TIMES.flatMap((_, stage) => ports.map((node) => row(stage, node)));
  // at half a step by the polynomial through the first state and the stages
  const [first, ...weights] = lagrangeWeights([0, ...STAGE_TIMES], 0.5) as [number, ...number[]];
  const middle = new Float64Array(columns);
  middle[heard.index] = first;
  weights.forEach((weight, stage) => {
    row(stage, heard.index).forEach((value, c) => {
      middle[c] = (middle[c] as number) + weight * value;
    });
  });
  const part = (from: readonly Float64Array[], start: number, width: number, sign = 1): Float64Array =>
    Float64Array.from({ length: from.length * width }, (_, at) => {
      const values = from[Math.floor(at / width)] as Float64Array;
      return sign * (values[start + (at % width)] as number);
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

/** Weights of values at `times` for the polynomial through them at `t`. */
export function lagrangeWeights(times: readonly number[], t: number): number[] {
  return times.map((tj, j) =>
    times.reduce((product, tk, k) => (k === j ? product : (product * (t - tk)) / (tj - tk)), 1),
  );
}

/** Past stage points that a forecast is drawn from: the last step's three, newest first, and the end of the one before. */
export const PAST_TIMES = [0, STAGE_TIMES[1] - 1, STAGE_TIMES[0] - 1, -1] as const;

/** Weights that carry the past stage points on to the next three by the polynomial through them; a stage a row. */
export function forecastWeights(): Float64Array {
  return Float64Array.from(STAGE_TIMES.flatMap((t) => lagrangeWeights(PAST_TIMES, t)));
}
