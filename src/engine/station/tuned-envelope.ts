/**
 * The tuned circuit on the envelope: one complex pole, E' = p·(E − s) with p = −(π·f0/Q)·(1 + j·2Qδ/f0), so that the
 * unmodulated carrier stands at 1. Solved exactly over a step for an envelope taken as the parabola through its
 * values at 0, 1/3 and 1 of the step, the stage times of the circuit's own rule.
 */
export class TunedEnvelope {
  /** Weights of E, s(0), s(1/3), s(1) for the values at 1/3 and 1: real then imaginary, 16. */
  readonly weights: Float64Array;
  /** Whether station and resonance coincide, so that the envelope stays real. */
  readonly tuned: boolean;
  /** E (real, imaginary) and the last envelope. */
  private readonly state = Float64Array.of(1, 0, 1);
  /**
   * Weights of a source n, dE/dt = … + n, straight through its values at 1/3 and 1: for E at 1/3 from both, then at 1, each
   * as real and imaginary, 8; seconds.
   */
  readonly sourceWeights = new Float64Array(8);
  /** E at a third of the last step and at its end, real and imaginary, before any source. */
  readonly ahead = Float64Array.of(1, 0, 1, 0);
  /** |E| at a third of the last step and at its end. */
  readonly magnitudes = new Float64Array([1, 1]);

  /**
   * @param carrierHertz  Hz
   * @param loadedQ       above 0
   * @param detuneHertz   station minus resonance, Hz
   * @param stepSeconds   above 0
   */
  constructor(carrierHertz: number, loadedQ: number, detuneHertz: number, stepSeconds: number) {
    const p = (-Math.PI * carrierHertz) / loadedQ;
    const slant = (2 * loadedQ * detuneHertz) / carrierHertz;
    this.tuned = slant === 0;
    this.weights = new Float64Array(16);
    [1 / 3, 1].forEach((c, row) => {
      const weights = stepWeights(c * p * stepSeconds, c * p * stepSeconds * slant, c);
      weights.forEach(([re, im], k) => {
        this.weights[8 * row + k] = re;
        this.weights[8 * row + 4 + k] = im;
      });
      this.sourceWeights.set(lineWeights(c * p * stepSeconds, c * p * stepSeconds * slant, c, stepSeconds), 4 * row);
    });
  }

  reset(): void {
    this.state[0] = 1;
    this.state[1] = 0;
    this.state[2] = 1;
    this.magnitudes.fill(1);
    this.ahead.set([1, 0, 1, 0]);
  }

  /** Takes the envelope at a third of the step and at its end, re the carrier: 1 + `modulation[from]` and the next. */
  step(modulation: Float64Array, from: number): void {
    const third = 1 + (modulation[from] as number);
    const end = 1 + (modulation[from + 1] as number);
    const { weights: w, state } = this;
    const re = state[0] as number;
    const im = state[1] as number;
    const last = state[2] as number;
    for (let row = 0; row < 2; row++) {
      const o = 8 * row;
      const drive = (w[o + 1] as number) * last + (w[o + 2] as number) * third + (w[o + 3] as number) * end;
      if (this.tuned) {
        const value = (w[o] as number) * re + drive;
        this.magnitudes[row] = Math.abs(value);
        if (row === 1) state[0] = value;
        continue;
      }
      const driveIm = (w[o + 5] as number) * last + (w[o + 6] as number) * third + (w[o + 7] as number) * end;
      const nextRe = (w[o] as number) * re - (w[o + 4] as number) * im + drive;
      const nextIm = (w[o] as number) * im + (w[o + 4] as number) * re + driveIm;
      this.magnitudes[row] = Math.sqrt(nextRe * nextRe + nextIm * nextIm);
      if (row === 1) {
        state[0] = nextRe;
        state[1] = nextIm;
      }
    }
    state[2] = end;
  }

  /** As `step`, but the step is left open for a source: E without it goes to `ahead`, and `finish` ends the step. */
  open(modulation: Float64Array, from: number): void {
    const third = 1 + (modulation[from] as number);
    const end = 1 + (modulation[from + 1] as number);
    const { weights: w, state, ahead } = this;
    const re = state[0] as number;
    const im = state[1] as number;
    const last = state[2] as number;
    for (let row = 0; row < 2; row++) {
      const o = 8 * row;
      const drive = (w[o + 1] as number) * last + (w[o + 2] as number) * third + (w[o + 3] as number) * end;
      const driveIm = (w[o + 5] as number) * last + (w[o + 6] as number) * third + (w[o + 7] as number) * end;
      ahead[2 * row] = (w[o] as number) * re - (w[o + 4] as number) * im + drive;
      ahead[2 * row + 1] = (w[o] as number) * im + (w[o + 4] as number) * re + driveIm;
    }
    state[2] = end;
  }

  /** Ends an open step with E as it came out under the source. */
  finish(re: number, im: number): void {
    this.state[0] = re;
    this.state[1] = im;
  }
}

type Pair = [number, number];

/** φ₁, φ₂, φ₃ of z: by series near zero, where the recursion φ_{k+1} = (φ_k − 1/k!)/z would lose its digits. */
function phiFunctions(re: number, im: number): [Pair, Pair, Pair] {
  const phis: Pair[] = [];
  for (let k = 1; k <= 3; k++) {
    if (Math.hypot(re, im) < 2) {
      let factor = 1;
      for (let j = 2; j <= k; j++) factor /= j;
      let term: Pair = [factor, 0];
      let sum: Pair = [factor, 0];
      for (let j = 1; j < 40; j++) {
        term = [(term[0] * re - term[1] * im) / (k + j), (term[0] * im + term[1] * re) / (k + j)];
        sum = [sum[0] + term[0], sum[1] + term[1]];
      }
      phis.push(sum);
      continue;
    }
    const before: Pair = k === 1 ? [Math.exp(re) * Math.cos(im), Math.exp(re) * Math.sin(im)] : (phis[k - 2] as Pair);
    const rest: Pair = [before[0] - (k === 3 ? 0.5 : 1), before[1]];
    const size = re * re + im * im;
    phis.push([(rest[0] * re + rest[1] * im) / size, (rest[1] * re - rest[0] * im) / size]);
  }
  return phis as [Pair, Pair, Pair];
}

/** Weights of E and of s at 0, 1/3, 1 for the value at fraction c of the step, z = c·p·h. */
function stepWeights(re: number, im: number, c: number): Pair[] {
  const [phi1, phi2, phi3] = phiFunctions(re, im);
  // −z·c^k·k!·φ_{k+1}: what a unit coefficient of (τ/h)^k brings
  const power = (phi: Pair, factor: number): Pair => [
    -(phi[0] * re - phi[1] * im) * factor,
    -(phi[0] * im + phi[1] * re) * factor,
  ];
  const constant = power(phi1, 1);
  const linear = power(phi2, c);
  const square = power(phi3, 2 * c * c);
  // parabola through s0, s1, s2 at 0, 1/3, 1: a1 = (9·s1 − s2 − 8·s0)/2, a2 = s2 − s0 − a1
  const mix = (a: number, b: number, d: number): Pair => [
    a * constant[0] + b * linear[0] + d * square[0],
    a * constant[1] + b * linear[1] + d * square[1],
  ];
  return [
    [Math.exp(re) * Math.cos(im), Math.exp(re) * Math.sin(im)],
    mix(1, -4, 3),
    mix(0, 4.5, -4.5),
    mix(0, -0.5, 1.5),
  ];
}

/** Weights for E at fraction c of the step of a source that is the straight line through its values at 1/3 and 1. */
function lineWeights(re: number, im: number, c: number, stepSeconds: number): number[] {
  const [phi1, phi2] = phiFunctions(re, im);
  const constant = phi1.map((value) => value * c * stepSeconds) as Pair;
  const linear = phi2.map((value) => value * c * c * stepSeconds) as Pair;
  return [
    1.5 * (constant[0] - linear[0]),
    1.5 * (constant[1] - linear[1]),
    1.5 * linear[0] - 0.5 * constant[0],
    1.5 * linear[1] - 0.5 * constant[1],
  ];
}
