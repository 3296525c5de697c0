import type { Complex } from './complex.ts';
import { solveReal } from './dense-solve.ts';
import { RoundMixer } from './fixed-point.ts';
import type { Tank } from './tuned-circuit.ts';

/** A periodic complex envelope at equally spaced instants of one audio period, 1 at rest. */
export interface PeriodicEnvelope {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

const MOST_ROUNDS = 40;
/**
 * The coil's envelope for a tone when the detector's admittance is known at every instant: the periodic solution of
 * dE/dt = p·(E − s) − κ·y·E with s = 1 + depth·cos, y the admittance less that at rest.
 */
export function envelopeUnder(tank: Tank, hertz: number, depth: number, y: PeriodicEnvelope): PeriodicEnvelope {
  const n = y.re.length;
  const size = 2 * n;
  const { pole, perSiemensSecond: kappa } = tank;
  const m = new Float64Array(size * size);
  const x = new Float64Array(size);
  for (let j = 0; j < n; j++) {
    for (let k = 0; k < n; k++) {
      if (j === k) continue;
      // spectral differentiation on an even number of instants
      const sign = (j - k) % 2 === 0 ? 1 : -1;
      const value = (2 * Math.PI * hertz * 0.5 * sign) / Math.tan((Math.PI * (j - k)) / n);
      m[j * size + k] = value;
      m[(n + j) * size + n + k] = value;
    }
    const re = kappa * (y.re[j] as number) - pole.re;
    const im = kappa * (y.im[j] as number) - pole.im;
    m[j * size + j] = re;
    m[j * size + n + j] = -im;
    m[(n + j) * size + j] = im;
    m[(n + j) * size + n + j] = re;
    const s = 1 + depth * Math.cos((2 * Math.PI * j) / n);
    x[j] = -pole.re * s;
    x[n + j] = -pole.im * s;
  }
  solveReal(m, size, x, 1);
  return { re: x.slice(0, n), im: x.slice(n) };
}

/**
 * Coil and detector brought to agreement over one period of a tone.
 *
 * @param agreed    largest change of the envelope, as a share of its mean, at which they agree
 * @param detector  the detector under an envelope: its admittance less that at rest, at every instant
 * @returns         the envelope on which both agree, and what of a change was left, as a share
 */
export function agreedEnvelope(
  tank: Tank,
  hertz: number,
  depth: number,
  start: PeriodicEnvelope,
  agreed: number,
  detector: (envelope: PeriodicEnvelope) => PeriodicEnvelope,
): { envelope: PeriodicEnvelope; left: number } {
  const n = start.re.length;
  const mixer = new RoundMixer();
  let at: Float64Array = Float64Array.of(...start.re, ...start.im);
  let left = Number.POSITIVE_INFINITY;
  for (let round = 0; round < MOST_ROUNDS && left > agreed; round++) {
    const next = envelopeUnder(tank, hertz, depth, detector({ re: at.slice(0, n), im: at.slice(n) }));
    left = 0;
    for (let k = 0; k < n; k++) {
      const dRe = (next.re[k] as number) - (at[k] as number);
      const dIm = (next.im[k] as number) - (at[n + k] as number);
      left = Math.max(left, Math.hypot(dRe, dIm));
    }
    at = mixer.mix(at, Float64Array.of(...next.re, ...next.im));
  }
  return { envelope: { re: at.slice(0, n), im: at.slice(n) }, left };
}

/** A period at twice the instants, by its harmonics. */
export function atTwiceTheInstants(values: Float64Array): Float64Array {
  const n = values.length;
  const out = new Float64Array(2 * n);
  // the kernel of trigonometric interpolation half-way between equally spaced instants, n even
  const between = Float64Array.from({ length: n }, (_, d) => {
    const angle = (Math.PI * (d + 0.5)) / n;
    return (d % 2 === 0 ? 1 : -1) / (n * Math.tan(angle));
  });
  for (let k = 0; k < n; k++) {
    out[2 * k] = values[k] as number;
    let sum = 0;
    for (let j = 0; j < n; j++) {
      const d = (k - j + n) % n;
      sum += (values[j] as number) * (between[d] as number);
    }
    out[2 * k + 1] = sum;
  }
  return out;
}

/** Admittance less that at rest, one instant after another. */
export function writeAdmittance(into: PeriodicEnvelope, k: number, now: Complex, atRest: Complex): void {
  into.re[k] = now.re - atRest.re;
  into.im[k] = now.im - atRest.im;
}
