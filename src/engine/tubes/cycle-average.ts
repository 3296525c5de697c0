import type { SmoothLaw } from './smooth-law.ts';

/**
 * What one law does over a carrier cycle, as a function of the slow voltage x and the carrier's peak a:
 * the mean current and the chord conductance (fundamental current over a), each with its slopes.
 * The carrier current is chord · a, in phase with the voltage that drives it.
 */
export interface CycleLaw {
  /**
   * Writes into `out[0..5]`: mean (A), ∂mean/∂x (S), ∂mean/∂a (S), chord (S), ∂chord/∂x (S/V), ∂chord/∂a (S/V).
   *
   * @param x  slow voltage, V
   * @param a  peak of the carrier, V, 0 or more
   */
  average(x: number, a: number, out: Float64Array): void;
  /** As `average` at x = `at[0]`, a = `at[1]`: numbers handed over in an array are not boxed, so a loop takes no memory. */
  averageAt(at: Float64Array, out: Float64Array): void;
  /** Mean and chord only, into `out[0]` and `out[3]`: what a step needs while its slopes are still good. */
  levelsAt(at: Float64Array, out: Float64Array): void;
}

export const MEAN = 0;
export const MEAN_BY_X = 1;
export const MEAN_BY_A = 2;
export const CHORD = 3;
export const CHORD_BY_X = 4;
export const CHORD_BY_A = 5;
/** Only from `averageAtNodes`: mixed slopes for tables. */
export const MEAN_BY_XX = 6;
export const MEAN_BY_XA = 7;
export const CHORD_BY_XX = 8;
export const CHORD_BY_XA = 9;

/**
 * Number of Gauss–Chebyshev nodes over half a cycle at which the averages have converged.
 * The current flows in a pulse about sqrt(2·scale/a) wide, so the count grows with the square root of a/scale.
 * Checked by doubling over the whole working range: below 1e-12 of the mean.
 */
export function nodesFor(amplitude: number, scaleVolts: number): number {
  return Math.ceil(20 + 11 * Math.sqrt(amplitude / scaleVolts));
}

/**
 * Cycle averages by Gauss–Chebyshev quadrature at cos((2k−1)π/2N), all ten figures (see the constants above).
 *
 * With I1 = (2/2π)∫ i·cosθ dθ, integration by parts gives chord = I1/a = 2·⟨i'·sin²θ⟩ and ∂mean/∂a = (a/2)·∂chord/∂x,
 * which stay exact as a → 0, where dividing by a would lose every digit.
 *
 * @param law    the instantaneous law
 * @param x      slow voltage, V
 * @param a      peak of the carrier, V, 0 or more
 * @param nodes  quadrature nodes, 1 or more
 * @param out    at least 10 long
 * @param work   at least 4 long, scratch
 */
export function averageAtNodes(
  law: SmoothLaw,
  x: number,
  a: number,
  nodes: number,
  out: Float64Array,
  work: Float64Array,
): void {
  let mean = 0;
  let meanX = 0;
  let meanXx = 0;
  let chord = 0;
  let chordX = 0;
  let chordA = 0;
  let chordXx = 0;
  let chordXa = 0;
  for (let k = 0; k < nodes; k++) {
    const cos = Math.cos(((2 * k + 1) * Math.PI) / (2 * nodes));
    const sinSquared = 1 - cos * cos;
    law.evaluate(x + a * cos, work);
    const slope = work[1] as number;
    const bend = work[2] as number;
    const third = work[3] as number;
    mean += work[0] as number;
    meanX += slope;
    meanXx += bend;
    chord += slope * sinSquared;
    chordX += bend * sinSquared;
    chordA += bend * sinSquared * cos;
    chordXx += third * sinSquared;
    chordXa += third * sinSquared * cos;
  }
  const one = 1 / nodes;
  const two = 2 / nodes;
  out[MEAN] = mean * one;
  out[MEAN_BY_X] = meanX * one;
  out[MEAN_BY_A] = 0.5 * a * chordX * two;
  out[CHORD] = chord * two;
  out[CHORD_BY_X] = chordX * two;
  out[CHORD_BY_A] = chordA * two;
  out[MEAN_BY_XX] = meanXx * one;
  out[MEAN_BY_XA] = 0.5 * a * chordXx * two;
  out[CHORD_BY_XX] = chordXx * two;
  out[CHORD_BY_XA] = chordXa * two;
}

/** A law's cycle averages by direct quadrature: slow (about 10 µs) and exact; tables are judged against it. */
export function directAverage(law: SmoothLaw): CycleLaw {
  const work = new Float64Array(4);
  const all = new Float64Array(10);
  return fromAverageAt((at, out) => {
    const a = at[1] as number;
    averageAtNodes(law, at[0] as number, a, nodesFor(a, law.scaleVolts), all, work);
    for (let k = 0; k < 6; k++) out[k] = all[k] as number;
  });
}

/** A law worked from voltages handed over in an array, in its other forms too. */
function fromAverageAt(averageAt: CycleLaw['averageAt']): CycleLaw {
  const point = new Float64Array(2);
  return {
    average(x, a, out) {
      point[0] = x;
      point[1] = a;
      averageAt(point, out);
    },
    averageAt,
    levelsAt: averageAt,
  };
}

/** A straight law: i = amps + siemens·(x − volts), whatever the carrier; the chord is the slope. */
export function straightCycleLaw(volts: number, amps: number, siemens: number): CycleLaw {
  return fromAverageAt((at, out) => {
    out[MEAN] = amps + siemens * ((at[0] as number) - volts);
    out[MEAN_BY_X] = siemens;
    out[MEAN_BY_A] = 0;
    out[CHORD] = siemens;
    out[CHORD_BY_X] = 0;
    out[CHORD_BY_A] = 0;
  });
}

/**
 * The textbook square law about a rest point: i = amps + siemens·(x − volts) + k·a², the carrier meeting siemens.
 *
 * @param ampsPerVoltSquared  k, A/V² of carrier peak
 */
export function squareCycleLaw(volts: number, amps: number, siemens: number, ampsPerVoltSquared: number): CycleLaw {
  return fromAverageAt((at, out) => {
    const a = at[1] as number;
    out[MEAN] = amps + siemens * ((at[0] as number) - volts) + ampsPerVoltSquared * a * a;
    out[MEAN_BY_X] = siemens;
    out[MEAN_BY_A] = 2 * ampsPerVoltSquared * a;
    out[CHORD] = siemens;
    out[CHORD_BY_X] = 0;
    out[CHORD_BY_A] = 0;
  });
}

/**
 * The textbook linear rectifier: i = v/R_d while v > 0, none below. With cos φ = −x/a (φ half the conduction angle):
 * mean = (a/πR_d)(sin φ − φ cos φ), chord = (φ − sin φ cos φ)/(πR_d).
 * Source of the closed form: F. E. Terman, Radio Engineers' Handbook, 1943 (from memory).
 *
 * @param chargeOhms  R_d, above 0
 */
export function linearRectifierCycleLaw(chargeOhms: number): CycleLaw {
  const g = 1 / chargeOhms;
  return fromAverageAt((at, out) => {
    const x = at[0] as number;
    const a = at[1] as number;
    if (x <= -a || x >= a) {
      const conducts = x > 0 ? g : 0;
      out[MEAN] = conducts * x;
      out[MEAN_BY_X] = conducts;
      out[MEAN_BY_A] = 0;
      out[CHORD] = conducts;
      out[CHORD_BY_X] = 0;
      out[CHORD_BY_A] = 0;
      return;
    }
    const cos = -x / a;
    const sin = Math.sqrt(1 - cos * cos);
    const phi = Math.acos(cos);
    const gPi = g / Math.PI;
    out[MEAN] = a * gPi * (sin - phi * cos);
    out[MEAN_BY_X] = gPi * phi;
    out[MEAN_BY_A] = gPi * sin;
    out[CHORD] = gPi * (phi - sin * cos);
    // dφ/dx = 1/(a sin φ), dφ/da = cos φ/(a sin φ); d(φ − sin φ cos φ)/dφ = 2 sin² φ
    out[CHORD_BY_X] = (gPi * 2 * sin) / a;
    out[CHORD_BY_A] = (gPi * 2 * sin * cos) / a;
  });
}
