import type { RestPoint } from '../circuits/rest-point.ts';
import type { Tank } from '../circuits/tuned-circuit.ts';
import { STAGES } from './implicit-rule.ts';

/** Change of the envelope, re its rest value, that ends the rounds of stage and coil: far below what is heard. */
export const ENVELOPE_SHARE = 5e-6;
/** Numbers in a row of the coil's equations: a complex number a stage and the right-hand side. */
const ROW = 2 * (STAGES + 1);

/**
 * A coil as built within a step: its envelope at the three stages for the admittance that the detector shows there.
 *
 * The pull −κ·ΔY·E is a source of the envelope, ΔY the admittance less that at rest. For a given ΔY the envelope at the
 * stages obeys linear equations, (1 + B·κ·ΔY)·E = E without pull, which hold however hard the detector pulls; only ΔY
 * itself is found in rounds with the stage.
 */
export class TankStep {
  /** Envelope at the stages without the detector's pull, set by the caller: real, imaginary. */
  readonly ahead = Float64Array.from({ length: 2 * STAGES }, (_, k) => (k % 2 === 0 ? 1 : 0));
  /** Envelope at the stages as it came out. */
  readonly envelope = new Float64Array(this.ahead);
  /** ΔY at the stages, S; and its four past points, real then imaginary. */
  readonly admittance = new Float64Array(2 * STAGES);
  readonly past = new Float64Array(8);
  /** Complex weights of the source at each stage for the envelope at each, s: set by the caller. */
  readonly weights = new Float64Array(2 * STAGES * STAGES);
  readonly perSiemensSecond: number;
  readonly peak: number;
  readonly input: { readonly re: number; readonly im: number };
  /** Change of ΔY times the carrier, A, below which the rounds end. */
  most = 0;
  private readonly rows = new Float64Array(ROW * STAGES);

  constructor(rest: RestPoint, tank: Tank) {
    this.perSiemensSecond = tank.perSiemensSecond;
    this.peak = rest.tuned.carrierPeakVolts;
    this.input = rest.phasors.input;
  }

  /** Takes the source's weights of a step length. */
  setWeights(weights: Float64Array): void {
    this.weights.set(weights);
    const reach = Math.max(...weights.map(Math.abs)) * this.perSiemensSecond;
    this.most = Math.max((ENVELOPE_SHARE * this.peak) / reach, 1e-300);
  }

  reset(): void {
    this.past.fill(0);
    this.admittance.fill(0);
  }

  /** ΔY at the stages from its past. */
  forecast(weights: Float64Array): void {
    const { admittance, past } = this;
    for (let s = 0; s < STAGES; s++) {
      for (let part = 0; part < 2; part++) {
        let sum = 0;
        for (let q = 0; q < 4; q++) sum += (weights[4 * s + q] as number) * (past[4 * part + q] as number);
        admittance[2 * s + part] = sum;
      }
    }
  }

  /** Envelope at the stages for the present ΔY. */
  solve(): void {
    const { rows, weights: b, admittance: y, ahead, envelope, perSiemensSecond: kappa } = this;
    for (let r = 0; r < STAGES; r++) {
      for (let c = 0; c < STAGES; c++) {
        const w = 2 * (STAGES * r + c);
        const yRe = kappa * (y[2 * c] as number);
        const yIm = kappa * (y[2 * c + 1] as number);
        const o = ROW * r + 2 * c;
        rows[o] = (b[w] as number) * yRe - (b[w + 1] as number) * yIm + (r === c ? 1 : 0);
        rows[o + 1] = (b[w] as number) * yIm + (b[w + 1] as number) * yRe;
      }
      rows[ROW * r + 2 * STAGES] = ahead[2 * r] as number;
      rows[ROW * r + 2 * STAGES + 1] = ahead[2 * r + 1] as number;
    }
    for (let k = 0; k < STAGES - 1; k++) {
      const p = (ROW + 2) * k;
      const pRe = rows[p] as number;
      const pIm = rows[p + 1] as number;
      const scale = 1 / (pRe * pRe + pIm * pIm);
      for (let r = k + 1; r < STAGES; r++) {
        const a = ROW * r + 2 * k;
        const fRe = ((rows[a] as number) * pRe + (rows[a + 1] as number) * pIm) * scale;
        const fIm = ((rows[a + 1] as number) * pRe - (rows[a] as number) * pIm) * scale;
        for (let c = k + 1; c <= STAGES; c++) {
          const from = ROW * k + 2 * c;
          const to = ROW * r + 2 * c;
          const re = rows[from] as number;
          const im = rows[from + 1] as number;
          rows[to] = (rows[to] as number) - fRe * re + fIm * im;
          rows[to + 1] = (rows[to + 1] as number) - fRe * im - fIm * re;
        }
      }
    }
    for (let k = STAGES - 1; k >= 0; k--) {
      let re = rows[ROW * k + 2 * STAGES] as number;
      let im = rows[ROW * k + 2 * STAGES + 1] as number;
      for (let c = k + 1; c < STAGES; c++) {
        const o = ROW * k + 2 * c;
        re -=
          (rows[o] as number) * (envelope[2 * c] as number) - (rows[o + 1] as number) * (envelope[2 * c + 1] as number);
        im -=
          (rows[o] as number) * (envelope[2 * c + 1] as number) + (rows[o + 1] as number) * (envelope[2 * c] as number);
      }
      const p = (ROW + 2) * k;
      const pRe = rows[p] as number;
      const pIm = rows[p + 1] as number;
      const scale = 1 / (pRe * pRe + pIm * pIm);
      envelope[2 * k] = (re * pRe + im * pIm) * scale;
      envelope[2 * k + 1] = (im * pRe - re * pIm) * scale;
    }
  }

  /** The step is over: its ΔY becomes the past. */
  advance(): void {
    const { past, admittance } = this;
    for (let part = 0; part < 2; part++) {
      const o = 4 * part;
      past[o + 3] = past[o] as number;
      past[o + 2] = admittance[part] as number;
      past[o + 1] = admittance[2 + part] as number;
      past[o] = admittance[4 + part] as number;
    }
  }
}
