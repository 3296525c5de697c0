/** Fractions of a step at which the envelope is wanted: the circuit's own stage times, the Radau points. */
const POINTS = [(4 - Math.sqrt(6)) / 10, (4 + Math.sqrt(6)) / 10, 1] as const;
/** Where the station's envelope is known within a step: at its start and at those points. */
const KNOWN = [0, ...POINTS] as const;

/**
 * The tuned circuit on the envelope: one complex pole, E' = p·(E − s) with p = −(π·f0/Q)·(1 + j·2Qδ/f0), so that the
 * unmodulated carrier stands at 1. Solved exactly over a step for an envelope taken as the cubic through its values at
 * the start and the three points of the step.
 *
 * A coil that the detector pulls has a source besides: E' = p·(E − s) + n. Then a step is opened, the source found with
 * the rest of the circuit, and the step finished with what E came to.
 */
export class TunedEnvelope {
  /** A row a point: weights of E, s at the start, s at the points; five real, then five imaginary. */
  readonly weights = new Float64Array(10 * POINTS.length);
  /** A row a point: complex weights of a source that is the parabola through its values at the points, 6; seconds. */
  readonly sourceWeights = new Float64Array(6 * POINTS.length);
  /** Whether station and resonance coincide, so that the envelope stays real. */
  readonly tuned: boolean;
  /** E at the points of the last step, real and imaginary, before any source. */
  readonly ahead = Float64Array.of(1, 0, 1, 0, 1, 0);
  /** |E| at the points of the last step. */
  readonly magnitudes = new Float64Array([1, 1, 1]);
  /** E and the last envelope of the station, two parts each. */
  private readonly state = Float64Array.of(1, 0, 1, 0);

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
    POINTS.forEach((c, row) => {
      const z: Pair = [c * p * stepSeconds, c * p * stepSeconds * slant];
      const brought = broughtByPowers(z, c);
      // −z: the source of the envelope is −p·s
      const drive = brought.map((power) => product([-z[0] / c, -z[1] / c], power));
      const parts = [[Math.exp(z[0]) * Math.cos(z[1]), Math.exp(z[0]) * Math.sin(z[1])], ...mixed(KNOWN, drive)];
      parts.forEach(([re, im], k) => {
        this.weights[10 * row + k] = re as number;
        this.weights[10 * row + 5 + k] = im as number;
      });
      mixed(POINTS, brought).forEach(([re, im], k) => {
        this.sourceWeights[6 * row + 2 * k] = re * stepSeconds;
        this.sourceWeights[6 * row + 2 * k + 1] = im * stepSeconds;
      });
    });
  }

  reset(): void {
    this.state[0] = 1;
    this.state[1] = 0;
    this.state[2] = 1;
    this.state[3] = 0;
    this.magnitudes.fill(1);
    for (let k = 0; k < this.ahead.length; k++) this.ahead[k] = k % 2 === 0 ? 1 : 0;
  }

  /**
   * Takes the envelope at the three points, re the carrier: 1 + `modulation[from]` and the next two, and `quadrature` in
   * the same way where the station's envelope has a second part.
   */
  step(modulation: Float64Array, from: number, quadrature: Float64Array | null = null): void {
    this.open(modulation, from, quadrature);
    const { ahead, magnitudes } = this;
    const real = this.tuned && quadrature === null;
    for (let row = 0; row < magnitudes.length; row++) {
      const re = ahead[2 * row] as number;
      const im = ahead[2 * row + 1] as number;
      magnitudes[row] = real ? Math.abs(re) : Math.sqrt(re * re + im * im);
    }
    this.state[0] = ahead[4] as number;
    this.state[1] = ahead[5] as number;
  }

  /** As `step`, but left open for a source: E without it goes to `ahead`, and `finish` ends the step. */
  open(modulation: Float64Array, from: number, quadrature: Float64Array | null = null): void {
    const { weights: w, state, ahead } = this;
    const re = state[0] as number;
    const im = state[1] as number;
    const last = state[2] as number;
    const lastIm = state[3] as number;
    for (let row = 0; row < POINTS.length; row++) {
      const o = 10 * row;
      const a0 = w[o + 1] as number;
      const b0 = w[o + 6] as number;
      let nextRe = (w[o] as number) * re - (w[o + 5] as number) * im + a0 * last - b0 * lastIm;
      let nextIm = (w[o] as number) * im + (w[o + 5] as number) * re + a0 * lastIm + b0 * last;
      for (let k = 0; k < POINTS.length; k++) {
        const a = w[o + 2 + k] as number;
        const b = w[o + 7 + k] as number;
        const s = 1 + (modulation[from + k] as number);
        const q = quadrature === null ? 0 : (quadrature[from + k] as number);
        nextRe += a * s - b * q;
        nextIm += a * q + b * s;
      }
      ahead[2 * row] = nextRe;
      ahead[2 * row + 1] = nextIm;
    }
    state[2] = 1 + (modulation[from + POINTS.length - 1] as number);
    state[3] = quadrature === null ? 0 : (quadrature[from + POINTS.length - 1] as number);
  }

  /** Ends an open step with E as it came out under the source. */
  finish(re: number, im: number): void {
    this.state[0] = re;
    this.state[1] = im;
  }
}

type Pair = [number, number];

function product(a: Pair, b: Pair): Pair {
  return [a[0] * b[0] - a[1] * b[1], a[0] * b[1] + a[1] * b[0]];
}

/** φ₁ to φ₄ of z: by series near zero, where the recursion φ_{k+1} = (φ_k − 1/k!)/z would lose its digits. */
function phiFunctions(re: number, im: number): Pair[] {
  const phis: Pair[] = [];
  const reciprocal = [1, 1, 0.5, 1 / 6];
  for (let k = 1; k <= 4; k++) {
    if (Math.hypot(re, im) < 3) {
      let factor = 1;
      for (let j = 2; j <= k; j++) factor /= j;
      let term: Pair = [factor, 0];
      let sum: Pair = [factor, 0];
      for (let j = 1; j < 60; j++) {
        term = [(term[0] * re - term[1] * im) / (k + j), (term[0] * im + term[1] * re) / (k + j)];
        sum = [sum[0] + term[0], sum[1] + term[1]];
      }
      phis.push(sum);
      continue;
    }
    const before: Pair = k === 1 ? [Math.exp(re) * Math.cos(im), Math.exp(re) * Math.sin(im)] : (phis[k - 2] as Pair);
    const rest: Pair = [before[0] - (reciprocal[k - 1] as number), before[1]];
    const size = re * re + im * im;
    phis.push([(rest[0] * re + rest[1] * im) / size, (rest[1] * re - rest[0] * im) / size]);
  }
  return phis;
}

/** What a source (τ/h)^m, m = 0 to 3, has brought E to at fraction c of a step of length h, per h; z = c·p·h. */
function broughtByPowers([re, im]: Pair, c: number): Pair[] {
  const factorial = [1, 1, 2, 6];
  return phiFunctions(re, im).map((phi, m): Pair => {
    const factor = c ** (m + 1) * (factorial[m] as number);
    return [phi[0] * factor, phi[1] * factor];
  });
}

/** Weights of values at `times` for the polynomial through them, when its powers bring what is stated. */
function mixed(times: readonly number[], brought: readonly Pair[]): Pair[] {
  return times.map((tj, j) => {
    // coefficients of the Lagrange polynomial of point j, by powers
    let coefficients = [1];
    times.forEach((tk, k) => {
      if (k === j) return;
      const next = new Array<number>(coefficients.length + 1).fill(0);
      coefficients.forEach((value, m) => {
        next[m + 1] = (next[m + 1] as number) + value / (tj - tk);
        next[m] = (next[m] as number) - (value * tk) / (tj - tk);
      });
      coefficients = next;
    });
    return coefficients.reduce<Pair>(
      (sum, value, m) => {
        const power = brought[m] as Pair;
        return [sum[0] + value * power[0], sum[1] + value * power[1]];
      },
      [0, 0],
    );
  });
}
