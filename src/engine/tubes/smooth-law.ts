/**
 * A current law of one voltage, differentiable three times, as the cycle averages need it.
 *
 * `evaluate` writes current (A), slope (A/V), curvature (A/V²) and third derivative (A/V³) at `volts` into `out[0..3]`.
 * `scaleVolts` is the shortest voltage over which the law changes much (its e-fold in the tail): it sets how finely
 * a cycle is sampled and a table is spaced.
 */
export interface SmoothLaw {
  readonly scaleVolts: number;
  evaluate(volts: number, out: Float64Array): void;
}

/** Below this value of sharpness × volts the current is less than 1e-17 of its value at zero and is taken as none. */
const TAIL = -700;

/**
 * The smooth power law i = scale · ( ln(1 + exp(sharpness·x)) / sharpness )^exponent.
 *
 * Source of the form: Dempwolf and Zölzer, DAFx-11, 2011 (from memory). The derivatives are worked here:
 * with S the bracket, S' = σ, S'' = c·σ(1−σ), S''' = c²·σ(1−σ)(1−2σ), σ the logistic function of c·x.
 *
 * @param scale      A/V^exponent, 0 or more (0 gives no current at all)
 * @param sharpness  1/V, above 0
 * @param exponent   1 to 3
 */
export function softKneeLaw(scale: number, sharpness: number, exponent: number): SmoothLaw {
  const c = sharpness;
  const g = exponent;
  return {
    scaleVolts: 1 / (c * g),
    evaluate(volts, out) {
      const y = c * volts;
      if (y < TAIL || scale === 0) {
        out[0] = 0;
        out[1] = 0;
        out[2] = 0;
        out[3] = 0;
        return;
      }
      let bracket: number;
      let sigma: number;
      if (y > 0) {
        const e = Math.exp(-y);
        bracket = (y + Math.log1p(e)) / c;
        sigma = 1 / (1 + e);
      } else {
        const e = Math.exp(y);
        bracket = Math.log1p(e) / c;
        sigma = e / (1 + e);
      }
      // the 3/2 law by a square root: it is evaluated millions of times
      const value = scale * (g === 1.5 ? bracket * Math.sqrt(bracket) : bracket ** g);
      // ratios to the bracket stay finite in the tail, where bracket and sigma vanish together
      const r = sigma / bracket;
      const s2 = (c * (1 - sigma) * sigma) / bracket;
      const s3 = (c * c * sigma * (1 - sigma) * (1 - 2 * sigma)) / bracket;
      out[0] = value;
      out[1] = value * g * r;
      out[2] = value * g * ((g - 1) * r * r + s2);
      out[3] = value * g * ((g - 1) * (g - 2) * r * r * r + 3 * (g - 1) * r * s2 + s3);
    },
  };
}

/**
 * The exponential law i = I0·exp(x/VT), or with `offset` 1 the diode's I0·(exp(x/VT) − 1).
 *
 * @param zeroVoltAmps  I0, A, above 0
 * @param thermalVolts  VT (times ideality), V, above 0
 */
export function exponentialLaw(zeroVoltAmps: number, thermalVolts: number, offset: 0 | 1 = 0): SmoothLaw {
  return {
    scaleVolts: thermalVolts,
    evaluate(volts, out) {
      const slope = Math.exp(Math.min(volts / thermalVolts, TAIL * -1)) * zeroVoltAmps;
      out[0] = slope - offset * zeroVoltAmps;
      out[1] = slope / thermalVolts;
      out[2] = slope / thermalVolts ** 2;
      out[3] = slope / thermalVolts ** 3;
    },
  };
}
