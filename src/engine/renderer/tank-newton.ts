import type { CarrierPath } from '../circuits/carrier-path.ts';
import { STAGES } from './implicit-rule.ts';
import { ENVELOPE_SHARE, type TankStep } from './tank-step.ts';

const SIZE = 2 * STAGES;
/** Numbers in a row of the coil's real equations: real and imaginary move a stage, and the right-hand side. */
const ROW = SIZE + 1;

/** What the stage's last pass left, by reference: see the stepper for the order of the numbers. */
export interface StageSlopes {
  readonly drive: Float64Array;
  readonly w: Float64Array;
  readonly ag: Float64Array;
  readonly au: Float64Array;
  readonly chord: Float64Array;
  readonly chordSlope: Float64Array;
  readonly peak: Float64Array;
  readonly blend: Float64Array;
  readonly inverse: Float64Array;
  readonly portFromCurrent: Float64Array;
}

/**
 * Newton on coil and stage together. Taking the admittance that came out as the next one in settles only while it hardly
 * depends on the carrier; a rectifier's grows so steeply with it that such rounds run apart. Here the envelope's move
 * takes along what the detector makes of it.
 */
export class TankNewton {
  private readonly tank: TankStep;
  private readonly path: CarrierPath;
  private readonly stage: StageSlopes;
  /** For one volt more of carrier at each stage: moves of port volts, of the two peaks, and of the admittance. */
  private readonly byVolts = new Float64Array(SIZE * STAGES);
  private readonly byPeaks = new Float64Array(SIZE * STAGES);
  private readonly byAdmittance = new Float64Array(SIZE * STAGES);
  private readonly rows = new Float64Array(ROW * SIZE);
  private readonly move = new Float64Array(SIZE);
  private readonly along = new Float64Array(SIZE);
  private readonly volts = new Float64Array(STAGES);

  constructor(tank: TankStep, path: CarrierPath, stage: StageSlopes) {
    this.tank = tank;
    this.path = path;
    this.stage = stage;
  }

  /**
   * Moves envelope, admittance and the stage's estimates; `tank.admittance` is that of the stage under `tank.envelope`.
   * True when the envelope has hardly moved.
   */
  step(): boolean {
    for (let c = 0; c < STAGES; c++) this.respond(c);
    this.build();
    this.solve();
    const { tank, stage, move, along, volts, byVolts, byPeaks, byAdmittance } = this;
    const { envelope, admittance } = tank;
    let largest = 0;
    for (let s = 0; s < STAGES; s++) {
      const re = move[2 * s] as number;
      const im = move[2 * s + 1] as number;
      largest = Math.max(largest, Math.abs(re) + Math.abs(im));
      volts[s] = tank.peak * ((along[2 * s] as number) * re + (along[2 * s + 1] as number) * im);
      envelope[2 * s] = (envelope[2 * s] as number) + re;
      envelope[2 * s + 1] = (envelope[2 * s + 1] as number) + im;
    }
    for (let c = 0; c < STAGES; c++) {
      const dv = volts[c] as number;
      for (let s = 0; s < STAGES; s++) {
        const o = SIZE * c + 2 * s;
        stage.w[2 * s] = (stage.w[2 * s] as number) + dv * (byVolts[o] as number);
        stage.w[2 * s + 1] = (stage.w[2 * s + 1] as number) + dv * (byVolts[o + 1] as number);
        stage.ag[s] = Math.max((stage.ag[s] as number) + dv * (byPeaks[o] as number), 0.2 * (stage.ag[s] as number));
        stage.au[s] = Math.max(
          (stage.au[s] as number) + dv * (byPeaks[o + 1] as number),
          0.2 * (stage.au[s] as number),
        );
        admittance[2 * s] = (admittance[2 * s] as number) + dv * (byAdmittance[o] as number);
        admittance[2 * s + 1] = (admittance[2 * s + 1] as number) + dv * (byAdmittance[o + 1] as number);
      }
    }
    return largest < ENVELOPE_SHARE;
  }

  /** What one volt more of carrier at stage c does at every stage. */
  private respond(c: number): void {
    const { stage, byVolts, byPeaks, byAdmittance, path } = this;
    const { blend, peak, chord, chordSlope, inverse, portFromCurrent } = stage;
    const e = stage.drive[c] as number;
    const share = e > 0 ? 1 / e : 0;
    const tg = (stage.ag[c] as number) * share;
    const tu = (stage.au[c] as number) * share;
    const b = 6 * c;
    const dg0 = (blend[b] as number) * tg + (blend[b + 1] as number) * tu;
    const du0 = (blend[b + 2] as number) * tg + (blend[b + 3] as number) * tu;
    const grid = (blend[b + 4] as number) * dg0;
    const plate = (blend[b + 5] as number) * du0 - grid;
    const o = SIZE * c;
    for (let r = 0; r < SIZE; r++) {
      let sum = 0;
      for (let q = 0; q < SIZE; q++) {
        const z = SIZE * q + 2 * c;
        const volts = (portFromCurrent[z] as number) * grid + (portFromCurrent[z + 1] as number) * plate;
        sum -= (inverse[SIZE * r + q] as number) * volts;
      }
      byVolts[o + r] = sum;
    }
    for (let s = 0; s < STAGES; s++) {
      const dv = byVolts[o + 2 * s] as number;
      const dp = byVolts[o + 2 * s + 1] as number;
      const p = 6 * s;
      const q = 5 * s;
      const dg = (s === c ? dg0 : 0) + (peak[p + 1] as number) * dv + (peak[p + 2] as number) * dp;
      const du = (s === c ? du0 : 0) + (peak[p + 4] as number) * dv + (peak[p + 5] as number) * dp;
      byPeaks[o + 2 * s] = dg;
      byPeaks[o + 2 * s + 1] = du;
      const g = (chordSlope[q] as number) * dv + (chordSlope[q + 1] as number) * dg;
      const k =
        (chordSlope[q + 2] as number) * dv + (chordSlope[q + 3] as number) * dp + (chordSlope[q + 4] as number) * du;
      path.inputMove(chord, 2 * s, g, k, byAdmittance, o + 2 * s);
    }
  }

  /** The coil's equations for the envelope's move, real and imaginary parts apart. */
  private build(): void {
    const { tank, rows, along, byAdmittance } = this;
    const { envelope, ahead, admittance, weights, perSiemensSecond: kappa, peak } = tank;
    for (let s = 0; s < STAGES; s++) {
      const re = envelope[2 * s] as number;
      const im = envelope[2 * s + 1] as number;
      const size = Math.sqrt(re * re + im * im);
      along[2 * s] = size > 0 ? re / size : 1;
      along[2 * s + 1] = size > 0 ? im / size : 0;
    }
    for (let r = 0; r < STAGES; r++) {
      const o = ROW * 2 * r;
      let rightRe = ahead[2 * r] as number;
      let rightIm = ahead[2 * r + 1] as number;
      for (let c = 0; c < STAGES; c++) {
        const at = 2 * (STAGES * r + c);
        const bRe = kappa * (weights[at] as number);
        const bIm = kappa * (weights[at + 1] as number);
        const yRe = admittance[2 * c] as number;
        const yIm = admittance[2 * c + 1] as number;
        const aRe = bRe * yRe - bIm * yIm + (r === c ? 1 : 0);
        const aIm = bRe * yIm + bIm * yRe;
        const eRe = envelope[2 * c] as number;
        const eIm = envelope[2 * c + 1] as number;
        rightRe -= aRe * eRe - aIm * eIm;
        rightIm -= aRe * eIm + aIm * eRe;
        rows[o + 2 * c] = aRe;
        rows[o + 2 * c + 1] = -aIm;
        rows[o + ROW + 2 * c] = aIm;
        rows[o + ROW + 2 * c + 1] = aRe;
      }
      for (let d = 0; d < STAGES; d++) {
        let qRe = 0;
        let qIm = 0;
        for (let c = 0; c < STAGES; c++) {
          const at = 2 * (STAGES * r + c);
          const eRe = envelope[2 * c] as number;
          const eIm = envelope[2 * c + 1] as number;
          const beRe = (weights[at] as number) * eRe - (weights[at + 1] as number) * eIm;
          const beIm = (weights[at] as number) * eIm + (weights[at + 1] as number) * eRe;
          const yRe = byAdmittance[SIZE * d + 2 * c] as number;
          const yIm = byAdmittance[SIZE * d + 2 * c + 1] as number;
          qRe += beRe * yRe - beIm * yIm;
          qIm += beRe * yIm + beIm * yRe;
        }
        const re = kappa * peak * (along[2 * d] as number);
        const im = kappa * peak * (along[2 * d + 1] as number);
        const at = o + 2 * d;
        rows[at] = (rows[at] as number) + qRe * re;
        rows[at + 1] = (rows[at + 1] as number) + qRe * im;
        rows[at + ROW] = (rows[at + ROW] as number) + qIm * re;
        rows[at + ROW + 1] = (rows[at + ROW + 1] as number) + qIm * im;
      }
      rows[o + SIZE] = rightRe;
      rows[o + ROW + SIZE] = rightIm;
    }
  }

  /** `move` from the rows, whose diagonal leads: no pivoting. */
  private solve(): void {
    const { rows, move } = this;
    for (let k = 0; k < SIZE; k++) {
      const p = ROW * k;
      const scale = 1 / (rows[p + k] as number);
      for (let r = k + 1; r < SIZE; r++) {
        const factor = (rows[ROW * r + k] as number) * scale;
        for (let c = k + 1; c < ROW; c++) {
          rows[ROW * r + c] = (rows[ROW * r + c] as number) - factor * (rows[p + c] as number);
        }
      }
    }
    for (let k = SIZE - 1; k >= 0; k--) {
      let sum = rows[ROW * k + SIZE] as number;
      for (let c = k + 1; c < SIZE; c++) sum -= (rows[ROW * k + c] as number) * (move[c] as number);
      move[k] = sum / (rows[ROW * k + k] as number);
    }
  }
}
