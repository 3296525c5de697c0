/**
 * Windowed-sinc resampling between the clip's rate and the circuit's steps: linear phase, Kaiser window.
 *
 * The pass band ends at 3/8 of the clip's rate (18 kHz at 48 kHz) and the stop band begins at 5/8, so that images and
 * aliases of what passes lie below −110 dB; slower clips get a sharper filter that passes 0.44 of their rate.
 */
const STOP_DECIBELS = 110;

interface Design {
  /** Half length of the kernel, clip samples. */
  readonly half: number;
  readonly beta: number;
}

/** Kaiser's design formulas (J. F. Kaiser, 1974; from memory): β and length for a stop band and a transition width. */
function design(clipRateHertz: number): Design {
  const transition = clipRateHertz < 40_000 ? 0.12 : 0.25;
  const taps = (STOP_DECIBELS - 8) / (2.285 * 2 * Math.PI * transition);
  return { half: Math.ceil(taps / 2), beta: 0.1102 * (STOP_DECIBELS - 8.7) };
}

/** Modified Bessel function I0 by its series; exact to rounding for the arguments a window has. */
function besselI0(x: number): number {
  let term = 1;
  let sum = 1;
  for (let k = 1; term > 1e-17 * sum; k++) {
    term *= (x / (2 * k)) ** 2;
    sum += term;
  }
  return sum;
}

/** Kernel at `samples` from its middle, unscaled. */
function kernel(samples: number, { half, beta }: Design): number {
  const r = samples / half;
  if (Math.abs(r) >= 1) return 0;
  const window = besselI0(beta * Math.sqrt(1 - r * r)) / besselI0(beta);
  const x = Math.PI * samples;
  return window * (Math.abs(x) < 1e-9 ? 1 : Math.sin(x) / x);
}

/** Clip samples by which the interpolator's output trails its input. */
export function filterDelay(clipRateHertz: number): number {
  return design(clipRateHertz).half;
}

/** The weights of both filters for the kernel. */
export interface FilterBank {
  readonly steps: number;
  readonly half: number;
  readonly phases: Float64Array;
  readonly rows: Float64Array;
  readonly middle: number;
}

/** A buffer whose newest `length` values always lie side by side. */
class SlidingWindow {
  readonly values: Float64Array;
  private readonly length: number;
  /** Start of the window in `values`. */
  at = 0;

  constructor(length: number) {
    this.length = length;
    this.values = new Float64Array(2 * length);
  }

  push(from: Float64Array | Float32Array, index: number): void {
    const value = from[index] as number;
    this.values[this.at] = value;
    this.values[this.at + this.length] = value;
    this.at = this.at + 1 === this.length ? 0 : this.at + 1;
  }

  reset(): void {
    this.values.fill(0);
    this.at = 0;
  }
}

/** Raises a clip to chosen instants within each clip sample. */
export class Interpolator {
  private readonly taps: number;
  readonly phases: Float64Array;
  private readonly window: SlidingWindow;
  private readonly count: number;
  /** The fraction that falls on a clip sample, where every other tap is zero; −1 if none. */
  private readonly plain: number;

  /** @param fractions  instants after the delayed sample, in clip samples, above 0 to 1 */
  constructor(clipRateHertz: number, fractions: readonly number[]) {
    const shape = design(clipRateHertz);
    this.taps = 2 * shape.half;
    this.count = fractions.length;
    this.plain = fractions.indexOf(1);
    this.phases = new Float64Array(this.count * this.taps);
    this.window = new SlidingWindow(this.taps);
    fractions.forEach((fraction, row) => {
      let sum = 0;
      for (let k = 0; k < this.taps; k++) {
        // newest sample last; the delayed sample stands at index half − 1
        const value = kernel(k - (shape.half - 1) - fraction, shape);
        this.phases[row * this.taps + k] = value;
        sum += value;
      }
      for (let k = 0; k < this.taps; k++) {
        this.phases[row * this.taps + k] = (this.phases[row * this.taps + k] as number) / sum;
      }
    });
  }

  /** Takes clip sample `index` of `input`; writes one value a fraction. */
  process(input: Float64Array | Float32Array, index: number, out: Float64Array): void {
    const { window, taps, phases, count } = this;
    window.push(input, index);
    const { values, at } = window;
    for (let row = 0; row < count; row++) {
      if (row === this.plain) {
        out[row] = values[at + (taps >> 1)] as number;
        continue;
      }
      const o = row * taps;
      let even = 0;
      let odd = 0;
      for (let k = 0; k < taps; k += 2) {
        even += (phases[o + k] as number) * (values[at + k] as number);
        odd += (phases[o + k + 1] as number) * (values[at + k + 1] as number);
      }
      out[row] = even + odd;
    }
  }

  reset(): void {
    this.window.reset();
  }
}

/**
 * Brings `factor` values a clip sample down to one. Delay: the same number of clip samples as the interpolator's.
 * Values that stand on clip instants meet the kernel's zeros (all but its middle) and are left out of the sum.
 */
export class Decimator {
  readonly half: number;
  private readonly factor: number;
  /** Weights of the values between clip instants, one row for each place after an instant. */
  readonly rows: Float64Array;
  readonly middle: number;
  private readonly lanes: readonly SlidingWindow[];

  constructor(clipRateHertz: number, factor: number) {
    const shape = design(clipRateHertz);
    this.half = shape.half;
    this.factor = factor;
    const taps = 2 * shape.half;
    this.rows = new Float64Array((factor - 1) * taps);
    let sum = 1;
    for (let row = 0; row < factor - 1; row++) {
      for (let k = 0; k < taps; k++) {
        const value = kernel(k - shape.half + (row + 1) / factor, shape);
        this.rows[row * taps + k] = value;
        sum += value;
      }
    }
    for (let k = 0; k < this.rows.length; k++) this.rows[k] = (this.rows[k] as number) / sum;
    this.middle = 1 / sum;
    // the lane of clip instants keeps one value less: the kernel's first tap stands just after an instant
    this.lanes = Array.from(
      { length: factor },
      (_, lane) => new SlidingWindow(lane < factor - 1 ? taps : shape.half + 1),
    );
  }

  /** Takes the `factor` values of one clip sample, the last on its instant; writes the value of `half` samples ago. */
  process(values: Float64Array, output: Float64Array | Float32Array, index: number): void {
    const { rows, half, factor, lanes } = this;
    for (let lane = 0; lane < factor; lane++) (lanes[lane] as SlidingWindow).push(values, lane);
    const taps = 2 * half;
    const instants = lanes[factor - 1] as SlidingWindow;
    let even = this.middle * (instants.values[instants.at] as number);
    let odd = 0;
    for (let row = 0; row < factor - 1; row++) {
      const { values: past, at } = lanes[row] as SlidingWindow;
      const o = row * taps;
      for (let k = 0; k < taps; k += 2) {
        even += (rows[o + k] as number) * (past[at + k] as number);
        odd += (rows[o + k + 1] as number) * (past[at + k + 1] as number);
      }
    }
    output[index] = even + odd;
  }

  reset(): void {
    for (const lane of this.lanes) lane.reset();
  }
}
