import { PLATE_KNEE_VOLTS, type TubeLaw } from './tube.ts';

/**
 * Value, slope and curvature of `scale · ( ln(1 + exp(sharpness·x)) / sharpness )^exponent`, without allocating.
 *
 * Far below zero the law is `scale·exp(exponent·sharpness·x)/sharpness^exponent`, and the three results keep their
 * relative accuracy (1e-12) until they underflow to 0; far above zero it is the plain power and nothing overflows before the power
 * itself does. Slope and curvature are taken from the value times the ratio logistic/softplus, which tends to 1 in the
 * tail, because the textbook form divides two numbers that both underflow.
 *
 * @param scale      perveance, A/V^exponent, 0 and up
 * @param sharpness  1/V, above 0
 * @param exponent   no unit, above 0
 * @param x          V, any finite value
 * @param out        three places: value (A), slope (A/V), curvature (A/V²)
 * Source: the closed form is Dempwolf and Zölzer, DAFx-11, 2011 (from memory); the derivatives are derived here:
 * with L the softplus and σ its logistic, f' = γ·C·f·σ/L, f'' = γ·C²·f·(σ/L)·[(γ−1)·σ/L + 1 − σ].
 */
export function softplusPower(scale: number, sharpness: number, exponent: number, x: number, out: Float64Array): void {
  const z = sharpness * x;
  const e = Math.exp(z > 0 ? -z : z);
  const small = Math.log1p(e);
  let softplus: number;
  let ratio: number;
  let complement: number;
  if (z > 0) {
    softplus = z + small;
    ratio = 1 / ((1 + e) * softplus);
    complement = e / (1 + e);
  } else {
    softplus = small;
    ratio = small > 0 ? e / ((1 + e) * small) : 1;
    complement = 1 / (1 + e);
  }
  const value = scale * power(softplus / sharpness, exponent);
  const slope = value * exponent * sharpness * ratio;
  out[0] = value;
  out[1] = slope;
  out[2] = slope * sharpness * ((exponent - 1) * ratio + complement);
}

/** Base to a power; 3/2 by a square root, which is several times faster and is the usual case. */
function power(base: number, exponent: number): number {
  return exponent === 1.5 ? base * Math.sqrt(base) : base ** exponent;
}

/** The value of `softplusPower` alone, A, for callers that need no derivative. Same parameters and accuracy. */
export function softplusPowerValue(scale: number, sharpness: number, exponent: number, x: number): number {
  const z = sharpness * x;
  const softplus = z > 0 ? z + Math.log1p(Math.exp(-z)) : Math.log1p(Math.exp(z));
  return scale * power(softplus / sharpness, exponent);
}

/** The one variable of the cathode law, u = v_g + v_p/mu + phi (V), from grid and plate volts against the cathode. */
export function controlVolts(law: TubeLaw, gridVolts: number, plateVolts: number): number {
  return gridVolts + plateVolts / law.mu + law.phi;
}

/** Cathode current (A, before the plate knee) at `u` volts of control voltage; any finite `u`, never negative. */
export function cathodeAmps(law: TubeLaw, u: number): number {
  return softplusPowerValue(law.G, law.C, law.gamma, u);
}

/** Grid current (A) at `gridVolts` against the cathode; any finite voltage, never negative, 0 where Gg is 0. */
export function gridAmps(law: TubeLaw, gridVolts: number): number {
  return softplusPowerValue(law.Gg, law.Cg, law.xi, gridVolts);
}

/** Cathode current with its first and second derivative by `u`, written to `out[0..2]` (A, A/V, A/V²). */
export function cathodeDerivatives(law: TubeLaw, u: number, out: Float64Array): void {
  softplusPower(law.G, law.C, law.gamma, u, out);
}

/** Grid current with its first and second derivative by grid volts, written to `out[0..2]` (A, A/V, A/V²). */
export function gridDerivatives(law: TubeLaw, gridVolts: number, out: Float64Array): void {
  softplusPower(law.Gg, law.Cg, law.xi, gridVolts, out);
}

/** Part of the cathode current that a plate at `plateVolts` collects: 0 at and below zero, 1 a few volts above. */
export function plateKnee(plateVolts: number): number {
  return plateVolts > 0 ? Math.tanh(plateVolts / PLATE_KNEE_VOLTS) : 0;
}

/**
 * Slope of `plateKnee`, 1/V. At zero volts exactly it is the slope on the conducting side, so that a Newton step
 * that starts at zero sees the way up.
 */
export function plateKneeSlope(plateVolts: number): number {
  if (plateVolts < 0) return 0;
  const c = Math.cosh(plateVolts / PLATE_KNEE_VOLTS);
  return 1 / (PLATE_KNEE_VOLTS * c * c);
}

/**
 * Plate current, A, of the whole law: I_k(u)·s(v_p) − I_g(v_g).
 *
 * With a positive grid and a plate near zero it is negative: that is the grid current the law takes from the cathode
 * current, and no bias of a detector comes near it.
 */
export function plateAmps(law: TubeLaw, gridVolts: number, plateVolts: number): number {
  const u = controlVolts(law, gridVolts, plateVolts);
  return cathodeAmps(law, u) * plateKnee(plateVolts) - gridAmps(law, gridVolts);
}

/** What a triode is worth at one point: current and the slopes a data sheet prints. */
export interface TriodePoint {
  readonly plateAmps: number;
  /** Transconductance ∂I_p/∂v_g, S. */
  readonly siemens: number;
  /** Plate conductance ∂I_p/∂v_p, S; its inverse is the plate resistance. */
  readonly plateSiemens: number;
}

/** Plate current and its two slopes at a point (V against the cathode); slopes of the law itself, not of an average. */
export function triodePoint(law: TubeLaw, gridVolts: number, plateVolts: number): TriodePoint {
  const cathode = new Float64Array(3);
  const grid = new Float64Array(3);
  cathodeDerivatives(law, controlVolts(law, gridVolts, plateVolts), cathode);
  gridDerivatives(law, gridVolts, grid);
  const knee = plateKnee(plateVolts);
  return {
    plateAmps: cathode[0]! * knee - grid[0]!,
    siemens: cathode[1]! * knee - grid[1]!,
    plateSiemens: (cathode[1]! * knee) / law.mu + cathode[0]! * plateKneeSlope(plateVolts),
  };
}
