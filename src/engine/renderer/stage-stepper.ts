import type { CarrierPath } from '../circuits/carrier-path.ts';
import type { RestPoint } from '../circuits/rest-point.ts';
import type { StageLaws } from '../circuits/stage-currents.ts';
import type { Tank } from '../circuits/tuned-circuit.ts';
import { CHORD, CHORD_BY_A, CHORD_BY_X, MEAN, MEAN_BY_A, MEAN_BY_X } from '../tubes/cycle-average.ts';
import { PLATE_KNEE_VOLTS } from '../tubes/tube.ts';
import { forecastWeights, planStep, type StepPlan } from './implicit-rule.ts';

/** Past this plate voltage the knee factor is 1 to the last bit. */
const KNEE_DONE_VOLTS = 19 * PLATE_KNEE_VOLTS;
/** Error that an unfinished Newton solution may leave in a voltage, as a share of the carrier's peak. */
const ERROR_SHARE = 1e-5;
/** Shortest e-fold of a grid law over which a move's quadratic remainder is reckoned, V. */
const SHORTEST_EFOLD_VOLTS = 0.06;
/** The least carrier that the shares are reckoned from, V: below it moves are nanovolts anyway. */
const LEAST_CARRIER_VOLTS = 0.005;
/** A grid move is never taken longer than this in one pass, V: the law is exponential over tens of millivolts. */
const LONGEST_GRID_MOVE_VOLTS = 2;
const MOST_PASSES = 60;
/** Passes after which moves are halved and the plate is let go below zero. */
const ROUSED_PASSES = 12;
/**
 * A plate above zero falls to no less than this share of itself in one pass. Its current dies at zero volts, so a tangent
 * taken far above can point far below, from where the next one points back up; from the near side they lead home.
 */
const LEAST_PLATE_SHARE = 0.1;
/** Slopes are taken anew when the stage has moved this far, V: a third of the shortest e-fold of a grid law. */
const STALE_VOLTS = 0.03;

/** Limits of a circuit: largest moves that end a step, and largest product of move and staleness of a quick pass. */
interface MoveLimits {
  readonly grid: number;
  readonly plate: number;
  readonly peak: number;
  readonly quick: number;
}

/** A move d leaves about d²/(2·e-fold) in a full pass, d·staleness/e-fold in a quick one. */
function moveLimits(rest: RestPoint): MoveLimits {
  const left = ERROR_SHARE * Math.max(rest.tuned.carrierPeakVolts, LEAST_CARRIER_VOLTS);
  const grid = Math.sqrt(2 * SHORTEST_EFOLD_VOLTS * left);
  // plate volts count by 1/mu; half of mu's share keeps a low-mu tube on the safe side
  return { grid, plate: 0.5 * grid * rest.laws.mu, peak: grid, quick: SHORTEST_EFOLD_VOLTS * left };
}

/** Most rounds of stage and coil in one step; one is the rule, two or three where a strong carrier swings widely. */
const MOST_ROUNDS = 12;
/** Change of the envelope, re its rest value, that ends the rounds: far below the error limits of what is heard. */
export const ENVELOPE_SHARE = 2e-6;

/** What a coil as built needs in a step. */
export interface TankStep {
  /** Envelope at both stages without the detector's pull, set by the caller: real, imaginary, 4. */
  readonly ahead: Float64Array;
  /** Envelope at both stages as it came out, 4. */
  readonly envelope: Float64Array;
  /** The detector's pull −κ·(Y − Y_rest)·E at both stages, 1/s, 4, and its last four points, real then imaginary, 8. */
  readonly pull: Float64Array;
  readonly past: Float64Array;
  /** Weights of the pull for the envelope, s: set by the caller, 8. */
  readonly weights: Float64Array;
  readonly perSiemensSecond: number;
  readonly peak: number;
  readonly input: { readonly re: number; readonly im: number };
  /** Largest effect of a pull on the envelope within a step, s. */
  reach: number;
}

function tankStep(rest: RestPoint, tank: Tank): TankStep {
  return {
    ahead: Float64Array.of(1, 0, 1, 0),
    envelope: Float64Array.of(1, 0, 1, 0),
    pull: new Float64Array(4),
    past: new Float64Array(8),
    weights: new Float64Array(8),
    perSiemensSecond: tank.perSiemensSecond,
    peak: rest.tuned.carrierPeakVolts,
    input: rest.phasors.input,
    reach: 0,
  };
}

/** One part (0 real, 1 imaginary) of the envelope at a stage: what comes anyway and both pulls by their complex weights. */
function tankSum(ahead: number, b: Float64Array, o: number, pull: Float64Array, part: 0 | 1): number {
  const p0 = pull[0] as number;
  const p1 = pull[1] as number;
  const p2 = pull[2] as number;
  const p3 = pull[3] as number;
  const r1 = b[o] as number;
  const i1 = b[o + 1] as number;
  const r2 = b[o + 2] as number;
  const i2 = b[o + 3] as number;
  return part === 0 ? ahead + r1 * p0 - i1 * p1 + r2 * p2 - i2 * p3 : ahead + r1 * p1 + i1 * p0 + r2 * p3 + i2 * p2;
}

/**
 * The grid-leak stage at audio rate: one implicit step a call, no memory taken.
 *
 * Unknowns at each of the two stages of a step are grid and plate volts and the carrier's peaks at grid and tube;
 * the peaks are eliminated stage by stage, then four equations give the volts. A forecast from the last two steps
 * makes one pass enough for most programme.
 */
export class StageStepper {
  /** Carrier's peak at the tuned circuit a third into the coming step and at its end, V, 0 or more: set by the caller. */
  readonly drive = new Float64Array(2);
  private readonly laws: StageLaws;
  private readonly rest: RestPoint;
  private readonly path: CarrierPath;
  private readonly limits: MoveLimits;
  private readonly at = new Float64Array(2);
  private readonly plan: StepPlan;
  private readonly weights = forecastWeights();
  /** Network unknowns now. */
  private readonly z: Float64Array;
  private readonly zNext: Float64Array;
  /** Last four stage points, newest first: grid volts, plate volts, grid ratio, tube ratio, 4 of each. */
  private readonly past = new Float64Array(16);
  private readonly w = new Float64Array(4);
  private readonly ag = new Float64Array(2);
  private readonly au = new Float64Array(2);
  private readonly open = new Float64Array(4);
  private readonly i0 = new Float64Array(4);
  /** Slopes of grid and plate current by grid and plate volts, a stage: 8. */
  private readonly slope = new Float64Array(8);
  /** Peaks' own moves: constant part and slopes by grid and plate volts, a stage: 2 × 6. */
  private readonly peak = new Float64Array(12);
  private readonly m = new Float64Array(20);
  /** For quick passes: inverse of the peaks' 2 × 2 and the means' slopes by peak, 6 a stage; inverse port equations. */
  private readonly blend = new Float64Array(12);
  private readonly square = new Float64Array(16);
  private readonly inverse = new Float64Array(16);
  private readonly iQuick = new Float64Array(4);
  /** Where the kept slopes were taken: grid volts, u less phi, peaks. */
  private readonly kept = new Float64Array(4);
  private readonly g = new Float64Array(6);
  private readonly k = new Float64Array(6);
  private readonly t = new Float64Array(6);
  /** Coil as built: what it needs in a step; null for a stiff source. */
  readonly tank: TankStep | null;
  /** Chords of grid and tube a stage, S: 4; and their slopes by grid volts, peak, then tube's by volts, plate, peak: 5 a stage. */
  private readonly chord = new Float64Array(4);
  private readonly chordSlope = new Float64Array(10);
  private readonly move = new Float64Array(4);
  private readonly two = new Float64Array(2);
  private readonly y = new Float64Array(2);
  /** Newton passes taken, steps that did not settle, and steps, since reset. */
  passes = 0;
  unsettled = 0;
  steps = 0;
  /** Steps that the kept slopes settled. */
  quick = 0;

  /**
   * @param rest  the circuit at rest; stepping starts there
   * @param laws  its averaged laws, as tables for speed
   */
  constructor(rest: RestPoint, laws: StageLaws, stepSeconds: number) {
    this.rest = rest;
    this.laws = laws;
    this.path = rest.path;
    this.limits = moveLimits(rest);
    this.plan = planStep(rest.audio.system, [rest.audio.gridNode, rest.audio.plateNode], stepSeconds);
    this.z = new Float64Array(this.plan.size);
    this.zNext = new Float64Array(this.plan.size);
    this.tank = rest.tuned.tank === null ? null : tankStep(rest, rest.tuned.tank);
    this.reset();
  }

  /** What the kernel is loaded with: plan, laws, forecast weights, limits (as laid out) and the starting past. */
  internals(): { plan: StepPlan; laws: StageLaws; weights: Float64Array; limits: Float64Array; past: Float64Array } {
    const limits = Float64Array.of(
      STALE_VOLTS,
      this.limits.quick,
      this.limits.grid,
      this.limits.plate,
      this.limits.peak,
      LONGEST_GRID_MOVE_VOLTS,
    );
    return { plan: this.plan, laws: this.laws, weights: this.weights, limits, past: this.past };
  }

  /** Back to the rest point: carrier on, no modulation. */
  reset(): void {
    const { rest, past } = this;
    this.z.set(rest.unknowns);
    const peak = rest.tuned.carrierPeakVolts;
    const ratio = rest.path;
    ratio.ratios(rest.currents.gridChord, rest.currents.tubeChord, this.t);
    for (let j = 0; j < 4; j++) {
      past[j] = rest.gridVolts;
      past[4 + j] = rest.plateVolts;
      past[8 + j] = peak > 0 ? rest.currents.gridCarrierPeak / peak : (this.t[0] as number);
      past[12 + j] = peak > 0 ? rest.currents.tubeCarrierPeak / peak : (this.t[1] as number);
    }
    this.passes = 0;
    this.unsettled = 0;
    this.steps = 0;
    this.quick = 0;
    this.kept.fill(Number.POSITIVE_INFINITY);
    this.tank?.past.fill(0);
  }

  /** Network unknowns at the end of the last step: node volts, then branch amperes. Read only. */
  get state(): Float64Array {
    return this.z;
  }

  gridVolts(): number {
    return this.z[this.rest.audio.gridNode] as number;
  }

  plateVolts(): number {
    return this.z[this.rest.audio.plateNode] as number;
  }

  /** One step under `drive`; with a coil as built, under the tank's own envelope, which `tank` then holds. */
  step(): void {
    const { plan, z, open } = this;
    const n = plan.size;
    this.steps++;
    for (let r = 0; r < 4; r++) {
      let sum = plan.portConstant[r] as number;
      for (let c = 0; c < n; c++) sum += (plan.portFromState[r * n + c] as number) * (z[c] as number);
      open[r] = sum;
    }
    if (this.tank) this.solveWithTank(this.tank);
    else {
      this.forecast();
      this.solve();
    }
    this.advance();
  }

  /** The stage under `drive` from the present estimates. */
  private solve(): void {
    let settled = this.quickPass();
    for (let pass = 0; pass < MOST_PASSES && !settled; pass++) {
      this.passes++;
      this.linearise(0);
      this.linearise(1);
      this.keepSlopes();
      settled = this.solvePorts(pass);
    }
    if (!settled) this.unsettled++;
  }

  /**
   * Stage and coil together: the detector's pull on the coil is forecast, the stage solved under the envelope that
   * follows, and both repeated while the pull that comes out still moves the envelope.
   */
  private solveWithTank(tank: TankStep): void {
    const { ahead, envelope, pull, past, weights: b, perSiemensSecond, peak, input } = tank;
    const { drive, weights } = this;
    for (let s = 0; s < 2; s++) {
      for (let part = 0; part < 2; part++) {
        let sum = 0;
        for (let q = 0; q < 4; q++) sum += (weights[4 * s + q] as number) * (past[4 * part + q] as number);
        pull[2 * s + part] = sum;
      }
    }
    for (let round = 0; round < MOST_ROUNDS; round++) {
      for (let s = 0; s < 2; s++) {
        const o = 4 * s;
        const re = tankSum(ahead[2 * s] as number, b, o, pull, 0);
        const im = tankSum(ahead[2 * s + 1] as number, b, o, pull, 1);
        const before = drive[s] as number;
        envelope[2 * s] = re;
        envelope[2 * s + 1] = im;
        drive[s] = peak * Math.sqrt(re * re + im * im);
        if (round > 0 && before > 0) {
          const share = (drive[s] as number) / before;
          this.ag[s] = (this.ag[s] as number) * share;
          this.au[s] = (this.au[s] as number) * share;
        }
      }
      if (round === 0) this.forecast();
      this.solve();
      let moved = 0;
      for (let s = 0; s < 2; s++) {
        this.two[0] = this.chord[2 * s] as number;
        this.two[1] = this.chord[2 * s + 1] as number;
        this.path.inputAt(this.two, this.y);
        const yRe = perSiemensSecond * ((this.y[0] as number) - input.re);
        const yIm = perSiemensSecond * ((this.y[1] as number) - input.im);
        const re = envelope[2 * s] as number;
        const im = envelope[2 * s + 1] as number;
        const nRe = yIm * im - yRe * re;
        const nIm = -yRe * im - yIm * re;
        moved += Math.abs(nRe - (pull[2 * s] as number)) + Math.abs(nIm - (pull[2 * s + 1] as number));
        pull[2 * s] = nRe;
        pull[2 * s + 1] = nIm;
      }
      if (moved * tank.reach < ENVELOPE_SHARE) break;
    }
    // the step ends with the pull as it came out
    envelope[2] = tankSum(ahead[2] as number, b, 4, pull, 0);
    envelope[3] = tankSum(ahead[3] as number, b, 4, pull, 1);
    for (let part = 0; part < 2; part++) {
      const o = 4 * part;
      past[o + 3] = past[o + 1] as number;
      past[o + 2] = past[o] as number;
      past[o + 1] = pull[part] as number;
      past[o] = pull[2 + part] as number;
    }
  }

  /** Carries the last four stage points on to the next two. */
  private forecast(): void {
    const { past, weights, w, ag, au } = this;
    for (let s = 0; s < 2; s++) {
      const w0 = weights[4 * s] as number;
      const w1 = weights[4 * s + 1] as number;
      const w2 = weights[4 * s + 2] as number;
      const w3 = weights[4 * s + 3] as number;
      const e = this.drive[s] as number;
      w[2 * s] =
        w0 * (past[0] as number) + w1 * (past[1] as number) + w2 * (past[2] as number) + w3 * (past[3] as number);
      w[2 * s + 1] =
        w0 * (past[4] as number) + w1 * (past[5] as number) + w2 * (past[6] as number) + w3 * (past[7] as number);
      const tg =
        w0 * (past[8] as number) + w1 * (past[9] as number) + w2 * (past[10] as number) + w3 * (past[11] as number);
      const tu =
        w0 * (past[12] as number) + w1 * (past[13] as number) + w2 * (past[14] as number) + w3 * (past[15] as number);
      ag[s] = tg > 0 ? tg * e : (past[8] as number) * e;
      au[s] = tu > 0 ? tu * e : (past[12] as number) * e;
    }
  }

  /** The network's next state from the stage currents; the stage points become the past. */
  private advance(): void {
    const { plan, z, past, w, ag, au, i0, zNext } = this;
    const e0 = this.drive[0] as number;
    const e1 = this.drive[1] as number;
    const n = plan.size;
    for (let r = 0; r < n; r++) {
      let sum = plan.stateConstant[r] as number;
      for (let c = 0; c < n; c++) sum += (plan.stateFromState[r * n + c] as number) * (z[c] as number);
      for (let c = 0; c < 4; c++) sum -= (plan.stateFromCurrent[4 * r + c] as number) * (i0[c] as number);
      zNext[r] = sum;
    }
    z.set(zNext);
    past[3] = past[1] as number;
    past[7] = past[5] as number;
    past[11] = past[9] as number;
    past[15] = past[13] as number;
    past[2] = past[0] as number;
    past[6] = past[4] as number;
    past[10] = past[8] as number;
    past[14] = past[12] as number;
    past[1] = w[0] as number;
    past[5] = w[1] as number;
    past[0] = w[2] as number;
    past[4] = w[3] as number;
    if (e0 > 0) {
      past[9] = (ag[0] as number) / e0;
      past[13] = (au[0] as number) / e0;
    }
    if (e1 > 0) {
      past[8] = (ag[1] as number) / e1;
      past[12] = (au[1] as number) / e1;
    }
  }

  /**
   * A pass with the slopes of an earlier step: values only, then the kept inverse. True when the error that the stale
   * slopes can have left is far below what is heard; else the estimate stays as forecast and the full passes follow.
   */
  private quickPass(): boolean {
    const { laws, g, k, t, w, ag, au, open, i0, iQuick, slope, peak, blend, inverse, kept, at, path, chord } = this;
    const { grid, cathode, phi, mu } = laws;
    const perMu = 1 / mu;
    const e0 = this.drive[0] as number;
    const e1 = this.drive[1] as number;
    const u1 = (w[2] as number) + (w[3] as number) * perMu;
    const stale =
      Math.abs((w[2] as number) - (kept[0] as number)) +
      Math.abs(u1 - (kept[1] as number)) +
      Math.abs((ag[1] as number) - (kept[2] as number)) +
      Math.abs((au[1] as number) - (kept[3] as number));
    if (!(stale < STALE_VOLTS)) return false;
    for (let s = 0; s < 2; s++) {
      const v = w[2 * s] as number;
      const p = w[2 * s + 1] as number;
      const e = s === 0 ? e0 : e1;
      const knee = laws.knee && p < KNEE_DONE_VOLTS ? (p > 0 ? Math.tanh(p / PLATE_KNEE_VOLTS) : 0) : 1;
      const gridPeak = ag[s] as number;
      const tubePeak = au[s] as number;
      at[0] = v;
      at[1] = gridPeak;
      grid.levelsAt(at, g);
      at[0] = v + p * perMu + phi;
      at[1] = tubePeak;
      cathode.levelsAt(at, k);
      at[0] = g[CHORD] as number;
      at[1] = knee * (k[CHORD] as number);
      chord[2 * s] = at[0];
      chord[2 * s + 1] = at[1];
      path.levelsAt(at, t);
      const fg = (t[0] as number) * e - gridPeak;
      const fu = (t[1] as number) * e - tubePeak;
      const b = 6 * s;
      const g0 = (blend[b] as number) * fg + (blend[b + 1] as number) * fu;
      const u0 = (blend[b + 2] as number) * fg + (blend[b + 3] as number) * fu;
      peak[b] = g0;
      peak[b + 3] = u0;
      const drawn = (g[MEAN] as number) + (blend[b + 4] as number) * g0;
      iQuick[2 * s] = drawn;
      iQuick[2 * s + 1] =
        knee * (k[MEAN] as number) +
        (blend[b + 5] as number) * u0 -
        drawn +
        laws.extraPlateSiemens * (p - laws.restPlateVolts);
    }
    const zz = this.plan.portFromCurrent;
    const c0 = iQuick[0] as number;
    const c1 = iQuick[1] as number;
    const c2 = iQuick[2] as number;
    const c3 = iQuick[3] as number;
    const r0 =
      (open[0] as number) -
      (w[0] as number) -
      (zz[0] as number) * c0 -
      (zz[1] as number) * c1 -
      (zz[2] as number) * c2 -
      (zz[3] as number) * c3;
    const r1 =
      (open[1] as number) -
      (w[1] as number) -
      (zz[4] as number) * c0 -
      (zz[5] as number) * c1 -
      (zz[6] as number) * c2 -
      (zz[7] as number) * c3;
    const r2 =
      (open[2] as number) -
      (w[2] as number) -
      (zz[8] as number) * c0 -
      (zz[9] as number) * c1 -
      (zz[10] as number) * c2 -
      (zz[11] as number) * c3;
    const r3 =
      (open[3] as number) -
      (w[3] as number) -
      (zz[12] as number) * c0 -
      (zz[13] as number) * c1 -
      (zz[14] as number) * c2 -
      (zz[15] as number) * c3;
    const d0 =
      (inverse[0] as number) * r0 +
      (inverse[1] as number) * r1 +
      (inverse[2] as number) * r2 +
      (inverse[3] as number) * r3;
    const d1 =
      (inverse[4] as number) * r0 +
      (inverse[5] as number) * r1 +
      (inverse[6] as number) * r2 +
      (inverse[7] as number) * r3;
    const d2 =
      (inverse[8] as number) * r0 +
      (inverse[9] as number) * r1 +
      (inverse[10] as number) * r2 +
      (inverse[11] as number) * r3;
    const d3 =
      (inverse[12] as number) * r0 +
      (inverse[13] as number) * r1 +
      (inverse[14] as number) * r2 +
      (inverse[15] as number) * r3;
    const dg0 = (peak[0] as number) + (peak[1] as number) * d0 + (peak[2] as number) * d1;
    const du0 = (peak[3] as number) + (peak[4] as number) * d0 + (peak[5] as number) * d1;
    const dg1 = (peak[6] as number) + (peak[7] as number) * d2 + (peak[8] as number) * d3;
    const du1 = (peak[9] as number) + (peak[10] as number) * d2 + (peak[11] as number) * d3;
    const size =
      Math.abs(d0) +
      Math.abs(d2) +
      (Math.abs(d1) + Math.abs(d3)) / mu +
      Math.abs(dg0) +
      Math.abs(dg1) +
      Math.abs(du0) +
      Math.abs(du1);
    if (!(size * (stale + size) < this.limits.quick)) return false;
    w[0] = (w[0] as number) + d0;
    w[1] = (w[1] as number) + d1;
    w[2] = (w[2] as number) + d2;
    w[3] = (w[3] as number) + d3;
    ag[0] = (ag[0] as number) + dg0;
    ag[1] = (ag[1] as number) + dg1;
    au[0] = (au[0] as number) + du0;
    au[1] = (au[1] as number) + du1;
    i0[0] = c0 + (slope[0] as number) * d0 + (slope[1] as number) * d1;
    i0[1] = c1 + (slope[2] as number) * d0 + (slope[3] as number) * d1;
    i0[2] = c2 + (slope[4] as number) * d2 + (slope[5] as number) * d3;
    i0[3] = c3 + (slope[6] as number) * d2 + (slope[7] as number) * d3;
    const { move } = this;
    move[0] = d0;
    move[1] = d1;
    move[2] = dg0;
    move[3] = du0;
    this.moveChords(0);
    move[0] = d2;
    move[1] = d3;
    move[2] = dg1;
    move[3] = du1;
    this.moveChords(1);
    this.quick++;
    return true;
  }

  /** Takes the chords of a stage along with its last move: grid volts, plate volts, grid peak, tube peak in `move`. */
  private moveChords(s: number): void {
    const { chord, chordSlope, move } = this;
    const o = 5 * s;
    chord[2 * s] =
      (chord[2 * s] as number) +
      (chordSlope[o] as number) * (move[0] as number) +
      (chordSlope[o + 1] as number) * (move[2] as number);
    chord[2 * s + 1] =
      (chord[2 * s + 1] as number) +
      (chordSlope[o + 2] as number) * (move[0] as number) +
      (chordSlope[o + 3] as number) * (move[1] as number) +
      (chordSlope[o + 4] as number) * (move[3] as number);
  }

  /** Keeps the slopes of a full pass, and the inverse of its port equations, for the quick passes that follow. */
  private keepSlopes(): void {
    const { plan, laws, slope, w, ag, au, kept, inverse, square } = this;
    const zz = plan.portFromCurrent;
    for (let r = 0; r < 4; r++) {
      const o = 4 * r;
      const z0 = zz[o] as number;
      const z1 = zz[o + 1] as number;
      const z2 = zz[o + 2] as number;
      const z3 = zz[o + 3] as number;
      square[o] = z0 * (slope[0] as number) + z1 * (slope[2] as number);
      square[o + 1] = z0 * (slope[1] as number) + z1 * (slope[3] as number);
      square[o + 2] = z2 * (slope[4] as number) + z3 * (slope[6] as number);
      square[o + 3] = z2 * (slope[5] as number) + z3 * (slope[7] as number);
      square[o + r] = (square[o + r] as number) + 1;
    }
    invertFour(square, inverse);
    kept[0] = w[2] as number;
    kept[1] = (w[2] as number) + (w[3] as number) / laws.mu;
    kept[2] = ag[1] as number;
    kept[3] = au[1] as number;
  }

  /** Currents and their slopes at one stage about the present estimate, the peaks eliminated. */
  private linearise(s: number): void {
    const e = this.drive[s] as number;
    const { laws, g, k, t, w, ag, au, i0, slope, peak, blend, at } = this;
    const v = w[2 * s] as number;
    const p = w[2 * s + 1] as number;
    const mu = laws.mu;
    let knee = 1;
    let kneeSlope = 0;
    if (laws.knee && p < KNEE_DONE_VOLTS) {
      knee = p > 0 ? Math.tanh(p / PLATE_KNEE_VOLTS) : 0;
      kneeSlope = p > 0 ? (1 - knee * knee) / PLATE_KNEE_VOLTS : 0;
    }
    const gridPeak = ag[s] as number;
    const tubePeak = au[s] as number;
    at[0] = v;
    at[1] = gridPeak;
    laws.grid.averageAt(at, g);
    at[0] = v + p / mu + laws.phi;
    at[1] = tubePeak;
    laws.cathode.averageAt(at, k);
    const chordK = k[CHORD] as number;
    at[0] = g[CHORD] as number;
    at[1] = knee * chordK;
    this.path.ratiosAt(at, t);
    const rg = (t[0] as number) * e;
    const ru = (t[1] as number) * e;
    const cga = g[CHORD_BY_A] as number;
    const cka = knee * (k[CHORD_BY_A] as number);
    const cgx = g[CHORD_BY_X] as number;
    const ckx = knee * (k[CHORD_BY_X] as number);
    const ckp = ckx / mu + kneeSlope * chordK;
    const chords = this.chordSlope;
    this.chord[2 * s] = g[CHORD] as number;
    this.chord[2 * s + 1] = knee * chordK;
    chords[5 * s] = cgx;
    chords[5 * s + 1] = cga;
    chords[5 * s + 2] = ckx;
    chords[5 * s + 3] = ckp;
    chords[5 * s + 4] = cka;
    const tgg = rg * (t[2] as number);
    const tgk = rg * (t[3] as number);
    const tug = ru * (t[4] as number);
    const tuk = ru * (t[5] as number);
    const m11 = 1 - tgg * cga;
    const m12 = -tgk * cka;
    const m21 = -tug * cga;
    const m22 = 1 - tuk * cka;
    const inverse = 1 / (m11 * m22 - m12 * m21);
    const fg = rg - gridPeak;
    const fu = ru - tubePeak;
    const bgv = tgg * cgx + tgk * ckx;
    const buv = tug * cgx + tuk * ckx;
    const bgp = tgk * ckp;
    const bup = tuk * ckp;
    const o = 6 * s;
    const g0 = (m22 * fg - m12 * fu) * inverse;
    const u0 = (m11 * fu - m21 * fg) * inverse;
    const gv = (m22 * bgv - m12 * buv) * inverse;
    const uv = (m11 * buv - m21 * bgv) * inverse;
    const gp = (m22 * bgp - m12 * bup) * inverse;
    const up = (m11 * bup - m21 * bgp) * inverse;
    peak[o] = g0;
    peak[o + 1] = gv;
    peak[o + 2] = gp;
    peak[o + 3] = u0;
    peak[o + 4] = uv;
    peak[o + 5] = up;
    blend[o] = m22 * inverse;
    blend[o + 1] = -m12 * inverse;
    blend[o + 2] = -m21 * inverse;
    blend[o + 3] = m11 * inverse;
    blend[o + 4] = g[MEAN_BY_A] as number;
    blend[o + 5] = knee * (k[MEAN_BY_A] as number);
    const ga = g[MEAN_BY_A] as number;
    const ka = knee * (k[MEAN_BY_A] as number);
    const kx = knee * (k[MEAN_BY_X] as number);
    const mean = k[MEAN] as number;
    const grid = (g[MEAN] as number) + ga * g0;
    const gridByV = (g[MEAN_BY_X] as number) + ga * gv;
    const gridByP = ga * gp;
    const extra = laws.extraPlateSiemens;
    i0[2 * s] = grid;
    i0[2 * s + 1] = knee * mean + ka * u0 - grid + extra * (p - laws.restPlateVolts);
    slope[4 * s] = gridByV;
    slope[4 * s + 1] = gridByP;
    slope[4 * s + 2] = kx + ka * uv - gridByV;
    slope[4 * s + 3] = kx / mu + kneeSlope * mean + ka * up - gridByP + extra;
  }

  /** Solves the four port volts with the stage currents taken as straight; moves the estimates. True when settled. */
  private solvePorts(pass: number): boolean {
    const { plan, w, ag, au, open, i0, slope, peak, m, move } = this;
    const zz = plan.portFromCurrent;
    // (1 + Z·J)·d = open − Z·i0 − w, 4 × 5 augmented in m
    for (let r = 0; r < 4; r++) {
      const z0 = zz[4 * r] as number;
      const z1 = zz[4 * r + 1] as number;
      const z2 = zz[4 * r + 2] as number;
      const z3 = zz[4 * r + 3] as number;
      const o = 5 * r;
      m[o] = z0 * (slope[0] as number) + z1 * (slope[2] as number);
      m[o + 1] = z0 * (slope[1] as number) + z1 * (slope[3] as number);
      m[o + 2] = z2 * (slope[4] as number) + z3 * (slope[6] as number);
      m[o + 3] = z2 * (slope[5] as number) + z3 * (slope[7] as number);
      m[o + r] = (m[o + r] as number) + 1;
      m[o + 4] =
        (open[r] as number) -
        (w[r] as number) -
        z0 * (i0[0] as number) -
        z1 * (i0[1] as number) -
        z2 * (i0[2] as number) -
        z3 * (i0[3] as number);
    }
    // conductances are positive and the diagonal leads, so elimination needs no pivoting
    for (let c = 0; c < 3; c++) {
      const inverse = 1 / (m[6 * c] as number);
      for (let r = c + 1; r < 4; r++) {
        const f = (m[5 * r + c] as number) * inverse;
        for (let q = c + 1; q < 5; q++) m[5 * r + q] = (m[5 * r + q] as number) - f * (m[5 * c + q] as number);
      }
    }
    const d3 = (m[19] as number) / (m[18] as number);
    const d2 = ((m[14] as number) - (m[13] as number) * d3) / (m[12] as number);
    const d1 = ((m[9] as number) - (m[8] as number) * d3 - (m[7] as number) * d2) / (m[6] as number);
    const d0 =
      ((m[4] as number) - (m[3] as number) * d3 - (m[2] as number) * d2 - (m[1] as number) * d1) / (m[0] as number);
    const grid = Math.max(Math.abs(d0), Math.abs(d2));
    const plate = Math.max(Math.abs(d1), Math.abs(d3));
    if (!(grid < 1e6) || !(plate < 1e9)) {
      // lost: start this step again from the rest point's neighbourhood
      w[0] = this.rest.gridVolts;
      w[1] = this.rest.plateVolts;
      w[2] = this.rest.gridVolts;
      w[3] = this.rest.plateVolts;
      return false;
    }
    const near = grid < this.limits.grid && plate < this.limits.plate;
    let share = grid > LONGEST_GRID_MOVE_VOLTS ? LONGEST_GRID_MOVE_VOLTS / grid : 1;
    // moves that go to and fro are halved, but not the last ones, or no step would ever be settled by them
    if (pass > ROUSED_PASSES && !near) share *= 0.5;
    let whole = share === 1;
    let largest = 0;
    for (let s = 0; s < 2; s++) {
      const dv = s === 0 ? d0 : d2;
      const dp = s === 0 ? d1 : d3;
      const o = 6 * s;
      const dg = (peak[o] as number) + (peak[o + 1] as number) * dv + (peak[o + 2] as number) * dp;
      const du = (peak[o + 3] as number) + (peak[o + 4] as number) * dv + (peak[o + 5] as number) * dp;
      const a = ag[s] as number;
      const b = au[s] as number;
      w[2 * s] = (w[2 * s] as number) + share * dv;
      const p = w[2 * s + 1] as number;
      let next = p + share * dp;
      if (this.laws.knee && pass <= ROUSED_PASSES && p > 0 && next < LEAST_PLATE_SHARE * p) {
        next = LEAST_PLATE_SHARE * p;
        whole = false;
      }
      w[2 * s + 1] = next;
      ag[s] = Math.max(a + share * dg, 0.2 * a);
      au[s] = Math.max(b + share * du, 0.2 * b);
      i0[2 * s] = (i0[2 * s] as number) + (slope[4 * s] as number) * dv + (slope[4 * s + 1] as number) * dp;
      i0[2 * s + 1] = (i0[2 * s + 1] as number) + (slope[4 * s + 2] as number) * dv + (slope[4 * s + 3] as number) * dp;
      move[0] = share * dv;
      move[1] = share * dp;
      move[2] = share * dg;
      move[3] = share * du;
      this.moveChords(s);
      largest = Math.max(largest, Math.abs(dg), Math.abs(du));
    }
    return whole && near && largest < this.limits.peak;
  }
}

/** Inverse of a 4 × 4 matrix with a leading diagonal; `m` is used up. */
function invertFour(m: Float64Array, out: Float64Array): void {
  for (let k = 0; k < 16; k++) out[k] = k % 5 === 0 ? 1 : 0;
  for (let c = 0; c < 4; c++) {
    const scale = 1 / (m[5 * c] as number);
    for (let q = 0; q < 4; q++) {
      m[4 * c + q] = (m[4 * c + q] as number) * scale;
      out[4 * c + q] = (out[4 * c + q] as number) * scale;
    }
    for (let r = 0; r < 4; r++) {
      if (r === c) continue;
      const f = m[4 * r + c] as number;
      for (let q = 0; q < 4; q++) {
        m[4 * r + q] = (m[4 * r + q] as number) - f * (m[4 * c + q] as number);
        out[4 * r + q] = (out[4 * r + q] as number) - f * (out[4 * c + q] as number);
      }
    }
  }
}
