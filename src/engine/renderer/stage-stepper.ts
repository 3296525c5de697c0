import type { CarrierPath } from '../circuits/carrier-path.ts';
import type { RestPoint } from '../circuits/rest-point.ts';
import type { StageLaws } from '../circuits/stage-currents.ts';
import { CHORD, CHORD_BY_A, CHORD_BY_X, MEAN, MEAN_BY_A, MEAN_BY_X } from '../tubes/cycle-average.ts';
import { PLATE_KNEE_VOLTS } from '../tubes/tube.ts';
import { forecastWeights, planStep, STAGES, type StepPlan } from './implicit-rule.ts';
import { TankNewton } from './tank-newton.ts';
import { TankStep } from './tank-step.ts';

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
/** What a quick pass came to, and how many may follow the first. */
const TOO_OLD = 0;
const SETTLED = 1;
const NEARER = 2;
const MOST_QUICK = 3;
/** Passes after which moves are halved and the plate is let go below zero. */
const ROUSED_PASSES = 12;
/**
 * A plate above zero falls to no less than this share of itself in one pass. Its current dies at zero volts, so a tangent
 * taken far above can point far below, from where the next one points back up; from the near side they lead home.
 */
const LEAST_PLATE_SHARE = 0.1;
/** Slopes are taken anew when the stage has moved this far, V: a third of the shortest e-fold of a grid law. */
const STALE_VOLTS = 0.03;
/** Most rounds of stage and coil in one step; one is the rule, two or three where a strong carrier swings widely. */
const MOST_ROUNDS = 16;
/** Rounds after which every one takes the stage's slopes anew. */
const FRESH_ROUNDS = 2;
/** Share of a round's move that the next may leave before rounds give way to Newton's. */
const LEAST_GAIN = 0.05;
/** Equations of a step: grid and plate at every stage. */
const SIZE = 2 * STAGES;

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

/**
 * The stage at audio rate: one implicit step a call, no memory taken.
 *
 * Unknowns at each of the three stages of a step are grid and plate volts and the carrier's peaks at grid and tube; the
 * peaks are eliminated stage by stage, then six equations give the volts. A forecast from the last stage points makes one
 * pass enough for most programme.
 */
export class StageStepper {
  /** Carrier's peak at the tuned circuit at the three stages of the coming step, V, 0 or more: set by the caller. */
  readonly drive = new Float64Array(STAGES);
  /** Coil as built; null for a stiff source. */
  readonly tank: TankStep | null;
  private readonly newton: TankNewton | null;
  /** Whether the detector's load has been met to grow so steeply with the carrier that bare rounds do not do. */
  private steep = false;
  /** What is heard at half of the last step, V, weighted; and at its end. */
  readonly heard = new Float64Array(2);
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
  /** Past stage points, newest first: grid volts, plate volts, grid ratio, tube ratio, 4 of each. */
  private readonly past = new Float64Array(16);
  private readonly w = new Float64Array(SIZE);
  private readonly ag = new Float64Array(STAGES);
  private readonly au = new Float64Array(STAGES);
  private readonly open = new Float64Array(SIZE);
  private readonly i0 = new Float64Array(SIZE);
  private readonly iQuick = new Float64Array(SIZE);
  private readonly move = new Float64Array(SIZE);
  private readonly right = new Float64Array(SIZE);
  /** Slopes of grid and plate current by grid and plate volts, 4 a stage. */
  private readonly slope = new Float64Array(4 * STAGES);
  /** Peaks' own moves: constant part and slopes by grid and plate volts, of grid and tube, 6 a stage. */
  private readonly peak = new Float64Array(6 * STAGES);
  /** For quick passes: inverse of the peaks' 2 × 2 and the means' slopes by peak, 6 a stage; inverse port equations. */
  private readonly blend = new Float64Array(6 * STAGES);
  private readonly inverse = new Float64Array(SIZE * SIZE);
  /** Where the kept slopes were taken: grid volts, u less phi, peaks. */
  private readonly kept = new Float64Array(4);
  private readonly g = new Float64Array(6);
  private readonly k = new Float64Array(6);
  private readonly t = new Float64Array(6);
  private readonly y = new Float64Array(2);
  /** Chords of grid and tube, 2 a stage, S; and their slopes: grid's by volts and peak, tube's by both volts and peak. */
  private readonly chord = new Float64Array(2 * STAGES);
  private readonly chordSlope = new Float64Array(5 * STAGES);
  /** Newton passes taken, steps that did not settle, and steps, since reset. */
  passes = 0;
  unsettled = 0;
  steps = 0;
  /** Solutions that the kept slopes settled. */
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
    const { system, gridNode, plateNode, output } = rest.audio;
    this.plan = planStep(system, [gridNode, plateNode], output, stepSeconds);
    this.z = new Float64Array(this.plan.size);
    this.zNext = new Float64Array(this.plan.size);
    this.tank = rest.tuned.tank === null ? null : new TankStep(rest, rest.tuned.tank);
    const { portFromCurrent } = this.plan;
    const { drive, w, ag, au, chord, chordSlope, peak, blend, inverse } = this;
    const slopes = { drive, w, ag, au, chord, chordSlope, peak, blend, inverse, portFromCurrent };
    this.newton = this.tank === null ? null : new TankNewton(this.tank, rest.path, slopes);
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
    rest.path.ratios(rest.currents.gridChord, rest.currents.tubeChord, this.t);
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
    this.steep = false;
    this.kept.fill(Number.POSITIVE_INFINITY);
    this.tank?.reset();
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
    for (let r = 0; r < SIZE; r++) {
      let sum = plan.portConstant[r] as number;
      for (let c = 0; c < n; c++) sum += (plan.portFromState[r * n + c] as number) * (z[c] as number);
      open[r] = sum;
    }
    if (this.tank && this.newton) this.solveWithTank(this.tank, this.newton);
    else {
      this.forecast();
      this.solve();
    }
    this.advance();
  }

  /** The stage under `drive` from the present estimates. */
  private solve(): void {
    let quick = this.quickPass();
    for (let more = 0; more < MOST_QUICK && quick === NEARER; more++) quick = this.quickPass();
    let settled = quick === SETTLED;
    for (let pass = 0; pass < MOST_PASSES && !settled; pass++) {
      this.passes++;
      for (let s = 0; s < STAGES; s++) this.linearise(s);
      this.keepSlopes();
      settled = this.solvePorts(pass);
    }
    if (!settled) this.unsettled++;
  }

  /**
   * Stage and coil together: the detector's admittance is forecast and the stage solved under the envelope that follows.
   * Where the admittance that comes out still moves the envelope, that is done again under it; from the first time on
   * that such a round gains little, by Newton's moves of both, which cost half a pass more.
   */
  private solveWithTank(tank: TankStep, newton: TankNewton): void {
    const { envelope, admittance, input, peak } = tank;
    const { drive, ag, au, y, chord, at } = this;
    tank.forecast(this.weights);
    tank.solve();
    let agreed = false;
    let bare = false;
    let last = Number.POSITIVE_INFINITY;
    for (let round = 0; round < MOST_ROUNDS && !agreed; round++) {
      for (let s = 0; s < STAGES; s++) {
        const re = envelope[2 * s] as number;
        const im = envelope[2 * s + 1] as number;
        const before = drive[s] as number;
        const now = peak * Math.sqrt(re * re + im * im);
        drive[s] = now;
        if (bare && before > 0) {
          ag[s] = ((ag[s] as number) * now) / before;
          au[s] = ((au[s] as number) * now) / before;
        }
      }
      if (round === 0) this.forecast();
      // a slope that is too small by half would throw the next move as far the other way
      if (round > FRESH_ROUNDS) this.kept.fill(Number.POSITIVE_INFINITY);
      this.solve();
      let moved = 0;
      for (let s = 0; s < STAGES; s++) {
        at[0] = chord[2 * s] as number;
        at[1] = chord[2 * s + 1] as number;
        this.path.inputAt(at, y);
        const yRe = (y[0] as number) - input.re;
        const yIm = (y[1] as number) - input.im;
        const change =
          Math.abs(yRe - (admittance[2 * s] as number)) + Math.abs(yIm - (admittance[2 * s + 1] as number));
        moved = Math.max(moved, change * (drive[s] as number));
        admittance[2 * s] = yRe;
        admittance[2 * s + 1] = yIm;
      }
      agreed = moved < tank.most;
      if (agreed) break;
      if (moved > LEAST_GAIN * last) this.steep = true;
      last = moved;
      bare = !this.steep;
      if (bare) tank.solve();
      else agreed = newton.step();
    }
    if (!agreed) this.unsettled++;
    tank.advance();
  }

  /** Carries the past stage points on to the coming ones. */
  private forecast(): void {
    const { past, weights, w, ag, au } = this;
    for (let s = 0; s < STAGES; s++) {
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

  /** The network's next state from the stage currents, and what is heard; the stage points become the past. */
  private advance(): void {
    const { plan, z, zNext, past, w, ag, au, i0, drive, heard } = this;
    const { index, weight } = this.rest.audio.output;
    const n = plan.size;
    for (let r = 0; r < n; r++) {
      let sum = plan.stateConstant[r] as number;
      for (let c = 0; c < n; c++) sum += (plan.stateFromState[r * n + c] as number) * (z[c] as number);
      for (let c = 0; c < SIZE; c++) sum -= (plan.stateFromCurrent[SIZE * r + c] as number) * (i0[c] as number);
      zNext[r] = sum;
    }
    let half = plan.halfConstant;
    for (let c = 0; c < n; c++) half += (plan.halfFromState[c] as number) * (z[c] as number);
    for (let c = 0; c < SIZE; c++) half -= (plan.halfFromCurrent[c] as number) * (i0[c] as number);
    z.set(zNext);
    heard[0] = weight * half;
    heard[1] = weight * (z[index] as number);
    for (let q = 0; q < 16; q += 4) past[q + 3] = past[q] as number;
    for (let s = 0; s < STAGES; s++) {
      const to = STAGES - 1 - s;
      past[to] = w[2 * s] as number;
      past[4 + to] = w[2 * s + 1] as number;
      const e = drive[s] as number;
      if (e > 0) {
        past[8 + to] = (ag[s] as number) / e;
        past[12 + to] = (au[s] as number) / e;
      }
    }
  }

  /**
   * A pass with the slopes of an earlier step: values only, then the kept inverse. Settled when the error that the stale
   * slopes can have left is far below what is heard; nearer when another pass will at least halve what is left; else the
   * estimate stays as it was and full passes follow.
   */
  private quickPass(): number {
    const { laws, g, k, t, w, ag, au, i0, iQuick, slope, peak, blend, kept, at, path, chord, move, drive } = this;
    const { grid, cathode, phi, mu } = laws;
    const perMu = 1 / mu;
    const last = STAGES - 1;
    const u1 = (w[2 * last] as number) + (w[2 * last + 1] as number) * perMu;
    const stale =
      Math.abs((w[2 * last] as number) - (kept[0] as number)) +
      Math.abs(u1 - (kept[1] as number)) +
      Math.abs((ag[last] as number) - (kept[2] as number)) +
      Math.abs((au[last] as number) - (kept[3] as number));
    if (!(stale < STALE_VOLTS)) return TOO_OLD;
    for (let s = 0; s < STAGES; s++) {
      const v = w[2 * s] as number;
      const p = w[2 * s + 1] as number;
      const e = drive[s] as number;
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
    this.portMoves(iQuick);
    let size = 0;
    for (let s = 0; s < STAGES; s++) {
      const dv = move[2 * s] as number;
      const dp = move[2 * s + 1] as number;
      const o = 6 * s;
      const dg = (peak[o] as number) + (peak[o + 1] as number) * dv + (peak[o + 2] as number) * dp;
      const du = (peak[o + 3] as number) + (peak[o + 4] as number) * dv + (peak[o + 5] as number) * dp;
      size += Math.abs(dv) + Math.abs(dp) * perMu + Math.abs(dg) + Math.abs(du);
    }
    const settled = size * (stale + size) < this.limits.quick;
    if (!settled && !(stale + size < STALE_VOLTS)) return TOO_OLD;
    for (let s = 0; s < STAGES; s++) {
      const dv = move[2 * s] as number;
      const dp = move[2 * s + 1] as number;
      const o = 6 * s;
      const q = 4 * s;
      const dg = (peak[o] as number) + (peak[o + 1] as number) * dv + (peak[o + 2] as number) * dp;
      const du = (peak[o + 3] as number) + (peak[o + 4] as number) * dv + (peak[o + 5] as number) * dp;
      w[2 * s] = (w[2 * s] as number) + dv;
      w[2 * s + 1] = (w[2 * s + 1] as number) + dp;
      ag[s] = (ag[s] as number) + dg;
      au[s] = (au[s] as number) + du;
      i0[2 * s] = (iQuick[2 * s] as number) + (slope[q] as number) * dv + (slope[q + 1] as number) * dp;
      i0[2 * s + 1] = (iQuick[2 * s + 1] as number) + (slope[q + 2] as number) * dv + (slope[q + 3] as number) * dp;
    }
    this.moveChords(1);
    this.quick++;
    return settled ? SETTLED : NEARER;
  }

  /** `move` = inverse · (open − w − Z·currents). */
  private portMoves(currents: Float64Array): void {
    const { plan, open, w, right, inverse, move } = this;
    const zz = plan.portFromCurrent;
    for (let r = 0; r < SIZE; r++) {
      let sum = (open[r] as number) - (w[r] as number);
      for (let c = 0; c < SIZE; c++) sum -= (zz[SIZE * r + c] as number) * (currents[c] as number);
      right[r] = sum;
    }
    for (let r = 0; r < SIZE; r++) {
      let sum = 0;
      for (let c = 0; c < SIZE; c++) sum += (inverse[SIZE * r + c] as number) * (right[c] as number);
      move[r] = sum;
    }
  }

  /** Takes the chords of all stages along with a share of the last move. */
  private moveChords(share: number): void {
    const { chord, chordSlope, move, peak } = this;
    for (let s = 0; s < STAGES; s++) {
      const dv = move[2 * s] as number;
      const dp = move[2 * s + 1] as number;
      const p = 6 * s;
      const o = 5 * s;
      const dg = (peak[p] as number) + (peak[p + 1] as number) * dv + (peak[p + 2] as number) * dp;
      const du = (peak[p + 3] as number) + (peak[p + 4] as number) * dv + (peak[p + 5] as number) * dp;
      chord[2 * s] =
        (chord[2 * s] as number) + share * ((chordSlope[o] as number) * dv + (chordSlope[o + 1] as number) * dg);
      chord[2 * s + 1] =
        (chord[2 * s + 1] as number) +
        share *
          ((chordSlope[o + 2] as number) * dv +
            (chordSlope[o + 3] as number) * dp +
            (chordSlope[o + 4] as number) * du);
    }
  }

  /** Keeps the inverse of a full pass's port equations, 1 + Z·J, for this pass and the quick ones that follow. */
  private keepSlopes(): void {
    const { plan, laws, slope, w, ag, au, kept, inverse } = this;
    const zz = plan.portFromCurrent;
    for (let r = 0; r < SIZE; r++) {
      for (let s = 0; s < STAGES; s++) {
        const z0 = zz[SIZE * r + 2 * s] as number;
        const z1 = zz[SIZE * r + 2 * s + 1] as number;
        const q = 4 * s;
        inverse[SIZE * r + 2 * s] = z0 * (slope[q] as number) + z1 * (slope[q + 2] as number);
        inverse[SIZE * r + 2 * s + 1] = z0 * (slope[q + 1] as number) + z1 * (slope[q + 3] as number);
      }
      inverse[(SIZE + 1) * r] = (inverse[(SIZE + 1) * r] as number) + 1;
    }
    invertInPlace(inverse);
    const last = STAGES - 1;
    kept[0] = w[2 * last] as number;
    kept[1] = (w[2 * last] as number) + (w[2 * last + 1] as number) / laws.mu;
    kept[2] = ag[last] as number;
    kept[3] = au[last] as number;
  }

  /** Currents and their slopes at one stage about the present estimate, the peaks eliminated. */
  private linearise(s: number): void {
    const e = this.drive[s] as number;
    const { laws, g, k, t, w, ag, au, i0, slope, peak, blend, at, chord, chordSlope } = this;
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
    chord[2 * s] = at[0];
    chord[2 * s + 1] = at[1];
    this.path.ratiosAt(at, t);
    const rg = (t[0] as number) * e;
    const ru = (t[1] as number) * e;
    const cga = g[CHORD_BY_A] as number;
    const cka = knee * (k[CHORD_BY_A] as number);
    const cgx = g[CHORD_BY_X] as number;
    const ckx = knee * (k[CHORD_BY_X] as number);
    const ckp = ckx / mu + kneeSlope * chordK;
    const cs = 5 * s;
    chordSlope[cs] = cgx;
    chordSlope[cs + 1] = cga;
    chordSlope[cs + 2] = ckx;
    chordSlope[cs + 3] = ckp;
    chordSlope[cs + 4] = cka;
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
    const ga = g[MEAN_BY_A] as number;
    const ka = knee * (k[MEAN_BY_A] as number);
    blend[o + 4] = ga;
    blend[o + 5] = ka;
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

  /** Solves the port volts with the stage currents taken as straight; moves the estimates. True when settled. */
  private solvePorts(pass: number): boolean {
    const { w, ag, au, i0, slope, peak, move, rest } = this;
    this.portMoves(i0);
    let grid = 0;
    let plate = 0;
    for (let s = 0; s < STAGES; s++) {
      grid = Math.max(grid, Math.abs(move[2 * s] as number));
      plate = Math.max(plate, Math.abs(move[2 * s + 1] as number));
    }
    if (!(grid < 1e6) || !(plate < 1e9)) {
      // lost: start this step again from the rest point's neighbourhood
      for (let s = 0; s < STAGES; s++) {
        w[2 * s] = rest.gridVolts;
        w[2 * s + 1] = rest.plateVolts;
        ag[s] = 0;
        au[s] = 0;
      }
      return false;
    }
    const near = grid < this.limits.grid && plate < this.limits.plate;
    let share = grid > LONGEST_GRID_MOVE_VOLTS ? LONGEST_GRID_MOVE_VOLTS / grid : 1;
    // moves that go to and fro are halved, but not the last ones, or no step would ever be settled by them
    if (pass > ROUSED_PASSES && !near) share *= 0.5;
    let whole = share === 1;
    let largest = 0;
    for (let s = 0; s < STAGES; s++) {
      const dv = move[2 * s] as number;
      const dp = move[2 * s + 1] as number;
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
      largest = Math.max(largest, Math.abs(dg), Math.abs(du));
    }
    this.moveChords(share);
    return whole && near && largest < this.limits.peak;
  }
}

/** Inverse of a square matrix of `SIZE` rows with a leading diagonal, where it stands; no pivoting. */
function invertInPlace(m: Float64Array): void {
  for (let k = 0; k < SIZE; k++) {
    const row = SIZE * k;
    const scale = 1 / (m[row + k] as number);
    m[row + k] = 1;
    for (let c = 0; c < SIZE; c++) m[row + c] = (m[row + c] as number) * scale;
    for (let r = 0; r < SIZE; r++) {
      if (r === k) continue;
      const other = SIZE * r;
      const factor = m[other + k] as number;
      m[other + k] = 0;
      for (let c = 0; c < SIZE; c++) m[other + c] = (m[other + c] as number) - factor * (m[row + c] as number);
    }
  }
}
