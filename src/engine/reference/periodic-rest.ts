import { solveDense } from './dense-inverse.ts';
import { advance, clearSums, presetSlowVolts, type Stepper, SUM_PLATE } from './two-port-stepper.ts';

/** Cycles run before Newton is tried, and between tries that fail. */
const WARM_CYCLES = 200;
const TRIES = 40;

/**
 * Brings a stepper to the state that repeats itself every carrier cycle, with no modulation.
 *
 * Newton on the map of one whole cycle, the state's dependence found by finite differences, the slow plate voltage
 * one more unknown. A slow capacitor (coupling) costs no more than a fast one. The stepper must stand at cycle 0 with
 * one cycle a period. Throws RangeError when no such state is found.
 */
export function findPeriodicState(s: Stepper, plateGuessVolts: number): void {
  const n = s.companion.states;
  const size = n + 1;
  const x = new Float64Array(size);
  const scale = new Float64Array(size);
  scale.set(s.companion.scale);
  scale[n] = 1;
  const image = new Float64Array(size);
  const trial = new Float64Array(size);
  const moved = new Float64Array(size);
  const jacobian = new Float64Array(size * size);

  /** Runs one cycle from `from` and leaves what changed, in volts, in `to`. */
  const residual = (from: Float64Array, to: Float64Array): number => {
    s.state.set(from.subarray(0, n));
    s.frozenSlowVolts = from[n]!;
    clearSums(s);
    advance(s, 1);
    let worst = 0;
    for (let r = 0; r < n; r++) {
      to[r] = (s.state[r]! - from[r]!) / scale[r]!;
      worst = Math.max(worst, Math.abs(to[r]!));
    }
    to[n] = s.memory[SUM_PLATE]! / s.stepsPerCycle - from[n]!;
    return Math.max(worst, Math.abs(to[n]!));
  };

  presetSlowVolts(s, plateGuessVolts);
  for (let attempt = 0; attempt < TRIES; attempt++) {
    s.frozenSlowVolts = null;
    advance(s, WARM_CYCLES);
    x.set(s.state);
    clearSums(s);
    advance(s, 1);
    x[n] = s.memory[SUM_PLATE]! / s.stepsPerCycle;
    let error = residual(x, image);
    for (let pass = 0; pass < 30; pass++) {
      // Rounding of a state of some hundred volts, over one cycle.
      if (error < 2e-12) break;
      for (let c = 0; c < size; c++) {
        const step = 1e-5;
        trial.set(x);
        trial[c]! += step * scale[c]!;
        residual(trial, moved);
        for (let r = 0; r < size; r++) jacobian[r * size + c] = (moved[r]! - image[r]!) / step;
      }
      let move: Float64Array;
      try {
        move = solveDense(jacobian, image, size);
      } catch {
        break;
      }
      // A step is good when what would still be to go has shrunk. The change a cycle cannot tell that: after a long
      // step along a slow part it is larger than before, though only fast parts are left.
      const far = largest(move);
      let factor = 1;
      let better = false;
      for (let halving = 0; halving < 16 && !better; halving++) {
        for (let r = 0; r < size; r++) trial[r] = x[r]! - factor * move[r]! * scale[r]!;
        const now = residual(trial, moved);
        if (Number.isFinite(now) && largest(solveDense(jacobian, moved, size)) < (1 - factor / 4) * far) {
          x.set(trial);
          image.set(moved);
          error = now;
          better = true;
        } else factor /= 2;
      }
      if (!better) break;
    }
    // 1e-10 V a cycle against a memory of at most some thousand cycles leaves the rest point within a microvolt.
    if (error < 1e-10) {
      s.state.set(x.subarray(0, n));
      presetSlowVolts(s, x[n]!);
      s.frozenSlowVolts = null;
      clearSums(s);
      return;
    }
    s.state.set(x.subarray(0, n));
    presetSlowVolts(s, x[n]!);
  }
  throw new RangeError('the reference found no rest point');
}

function largest(values: Float64Array): number {
  return values.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
}
