import {
  GRID_EXPONENTIAL,
  GRID_RECTIFIER,
  GRID_TUBE,
  type PackedLaws,
  PLATE_STRAIGHT,
  PLATE_TUBE,
} from './instantaneous-laws.ts';
import type { DrivePhasors } from './source-drive.ts';
import type { Companion, Observation } from './trapezoidal-companion.ts';

/** Means are written once per block of a cycle, so that carrier sidebands do not fold into the audio harmonics. */
export const BLOCKS_PER_CYCLE = 8;

/** Places in `Stepper.memory`. */
const OLD_GRID_AMPS = 0;
const OLD_PLATE_AMPS = 3;
const SLOW_SUM = 6;
const GRID_AMPS_PEAK = 7;
const PLATE_AMPS_PEAK = 8;
const STEPS = 9;
const PASSES = 10;
/** Sums over steps since they were last cleared: grid, plate and observed volts with cos and sin, then the currents. */
export const SUM_GRID_COS = 11;
export const SUM_GRID_SIN = 12;
export const SUM_PLATE_COS = 13;
export const SUM_PLATE_SIN = 14;
export const SUM_SEEN_COS = 15;
export const SUM_SEEN_SIN = 16;
export const SUM_GRID_AMPS = 17;
export const SUM_PLATE_AMPS = 18;
export const SUM_GRID = 19;
export const SUM_PLATE = 20;
export const SUM_SEEN = 21;
const MEMORY = 22;

/** Everything the loop works on. Arrays are changed in place; the rest is fixed. */
export interface Stepper {
  readonly companion: Companion;
  readonly laws: PackedLaws;
  readonly stepsPerCycle: number;
  /** Carrier cycles in one audio period. */
  readonly cyclesPerPeriod: number;
  readonly drive: DrivePhasors;
  readonly seen: Observation;
  readonly state: Float64Array;
  readonly memory: Float64Array;
  /** Plate volts over the last carrier cycle, and the place of the oldest. */
  readonly slowRing: Float64Array;
  /** When not null the slow plate voltage is this, not the running mean. */
  frozenSlowVolts: number | null;
  /** Carrier cycles since the start of the audio period. */
  cycle: number;
  /** Block means of grid, plate and observed volts; empty for none. Wraps round at its end. */
  blocks: Float64Array;
  blockAt: number;
  readonly cosTable: Float64Array;
  readonly sinTable: Float64Array;
  readonly turnCos: Float64Array;
  readonly turnSin: Float64Array;
}

/** A stepper at state 0. */
export function makeStepper(
  companion: Companion,
  laws: PackedLaws,
  stepsPerCycle: number,
  cyclesPerPeriod: number,
  drive: DrivePhasors,
  seen: Observation,
): Stepper {
  const table = (f: (x: number) => number, turns: number): Float64Array =>
    Float64Array.from({ length: stepsPerCycle }, (_, k) => f((2 * Math.PI * (k + 1)) / (stepsPerCycle * turns)));
  return {
    companion,
    laws,
    stepsPerCycle,
    cyclesPerPeriod,
    drive,
    seen,
    state: new Float64Array(companion.states),
    memory: new Float64Array(MEMORY),
    slowRing: new Float64Array(stepsPerCycle),
    frozenSlowVolts: null,
    cycle: 0,
    blocks: new Float64Array(0),
    blockAt: 0,
    cosTable: table(Math.cos, 1),
    sinTable: table(Math.sin, 1),
    turnCos: table(Math.cos, cyclesPerPeriod),
    turnSin: table(Math.sin, cyclesPerPeriod),
  };
}

/** Fills the slow plate voltage as if it had stood at `volts` for a cycle. */
export function presetSlowVolts(s: Stepper, volts: number): void {
  s.slowRing.fill(volts);
  s.memory[SLOW_SUM] = volts * s.stepsPerCycle;
}

/** Forgets the sums of phasors, currents and volts. */
export function clearSums(s: Stepper): void {
  s.memory.fill(0, SUM_GRID_COS);
}

/** Mean number of Newton passes a step since the stepper was made. */
export function newtonPasses(s: Stepper): number {
  return s.memory[PASSES]! / Math.max(1, s.memory[STEPS]!);
}

/** Newton's passes allowed in one step before the circuit is called unsolvable. */
const MAX_PASSES = 80;
/** A law's error left by the last linearisation, as part of the largest current of late. */
const LAW_TOLERANCE = 1e-6;

/**
 * Advances a stepper by whole carrier cycles.
 *
 * One long function on purpose: doubles passed through calls that are not inlined are boxed, and this loop runs
 * ten million times. Throws RangeError when Newton does not settle.
 */
export function advance(s: Stepper, cycles: number): void {
  const { companion, laws, stepsPerCycle, drive, seen, state, memory, slowRing } = s;
  const { cosTable, sinTable, turnCos, turnSin, blocks } = s;
  const n = companion.states;
  const { step, stepHeld, stepDrive, stepPort, port } = companion;
  const next = new Float64Array(n);
  const gHeld = companion.portHeld[0]!;
  const pHeld = companion.portHeld[1]!;
  const gDrive = companion.portDrive[0]!;
  const pDrive = companion.portDrive[1]!;
  const zgg = companion.portOhms[0]!;
  const zgp = companion.portOhms[1]!;
  const zpg = companion.portOhms[2]!;
  const zpp = companion.portOhms[3]!;
  const seenRow = seen.row;
  const seenHeld = seen.held;
  const seenDrive = seen.drive;
  const seenG = seen.port[0]!;
  const seenP = seen.port[1]!;
  const gridCode = laws.gridCode;
  const plateCode = laws.plateCode;
  const g0 = laws.grid[0]!;
  const g1 = laws.grid[1]!;
  const g2 = laws.grid[2]!;
  const g3 = laws.grid[3]!;
  const p0 = laws.plate[0]!;
  const p1 = laws.plate[1]!;
  const p2 = laws.plate[2]!;
  const overMu = laws.plate[3]!;
  const phi = laws.plate[4]!;
  const knee = laws.plate[5]!;
  const gridThreeHalves = g2 === 1.5;
  const plateThreeHalves = p2 === 1.5;
  const gridBend = gridCode === GRID_TUBE ? g1 * g2 : gridCode === GRID_EXPONENTIAL ? g1 : 0;
  const plateBend = plateCode === PLATE_TUBE ? p1 * p2 : 0;
  const frozen = s.frozenSlowVolts;
  const isFrozen = frozen !== null;
  const { carrierRe, carrierIm, sumRe, sumIm, differenceRe, differenceIm } = drive;
  const blockSteps = stepsPerCycle / BLOCKS_PER_CYCLE;
  const overBlock = 1 / blockSteps;
  const blockRoom = blocks.length;

  let gA = memory[OLD_GRID_AMPS]!;
  let gB = memory[OLD_GRID_AMPS + 1]!;
  let gC = memory[OLD_GRID_AMPS + 2]!;
  let pA = memory[OLD_PLATE_AMPS]!;
  let pB = memory[OLD_PLATE_AMPS + 1]!;
  let pC = memory[OLD_PLATE_AMPS + 2]!;
  let gridPeak = memory[GRID_AMPS_PEAK]!;
  let platePeak = memory[PLATE_AMPS_PEAK]!;
  let slowSum = memory[SLOW_SUM]!;
  const slowAtStart = isFrozen ? frozen : slowSum / stepsPerCycle;
  let slowFactor = slowAtStart > 0 ? Math.tanh(slowAtStart / knee) : 0;
  let passes = 0;
  let blockAt = s.blockAt;

  for (let c = 0; c < cycles; c++) {
    const turn = (2 * Math.PI * s.cycle) / s.cyclesPerPeriod;
    const startCos = Math.cos(turn);
    const startSin = Math.sin(turn);
    let gridCos = 0;
    let gridSin = 0;
    let plateCos = 0;
    let plateSin = 0;
    let seenCos = 0;
    let seenSin = 0;
    let gridAmps = 0;
    let plateAmps = 0;
    let gridCycle = 0;
    let plateCycle = 0;
    let seenCycle = 0;
    let k = 0;
    for (let b = 0; b < BLOCKS_PER_CYCLE; b++) {
      let gridSum = 0;
      let plateSum = 0;
      let seenSum = 0;
      for (let j = 0; j < blockSteps; j++, k++) {
        // The drive at the end of this step.
        const tc = turnCos[k]!;
        const ts = turnSin[k]!;
        const pr = startCos * tc - startSin * ts;
        const pi = startCos * ts + startSin * tc;
        const cosine = cosTable[k]!;
        const sine = sinTable[k]!;
        const e =
          (carrierRe + sumRe * pr - differenceIm * pi) * cosine - (carrierIm + sumIm * pr + differenceRe * pi) * sine;

        // Port volts with no port current, then with the current extrapolated from the last three steps.
        let gOpen = gHeld + gDrive * e;
        let pOpen = pHeld + pDrive * e;
        for (let r = 0; r < n; r++) {
          const w = state[r]!;
          gOpen += port[r]! * w;
          pOpen += port[n + r]! * w;
        }
        let ig = 3 * (gA - gB) + gC;
        let ip = 3 * (pA - pB) + pC;
        let vg = gOpen - zgg * ig - zgp * ip;
        let vp = pOpen - zpg * ig - zpp * ip;

        let dig = 0;
        let dpg = 0;
        let dpp = 0;
        for (let pass = 1; ; pass++) {
          // Grid current and its slope.
          if (gridCode === GRID_TUBE) {
            const x = g1 * vg;
            if (x < -60) {
              ig = 0;
              dig = 0;
            } else {
              let y = vg;
              let sigma = 1;
              if (x < 40) {
                const ex = Math.exp(x);
                y = Math.log1p(ex) / g1;
                sigma = ex / (1 + ex);
              }
              if (gridThreeHalves) {
                const root = g0 * Math.sqrt(y);
                ig = root * y;
                dig = 1.5 * root * sigma;
              } else {
                ig = g0 * y ** g2;
                dig = ((g2 * ig) / y) * sigma;
              }
            }
          } else if (gridCode === GRID_EXPONENTIAL) {
            const x = vg * g1;
            // Beyond e^60 the law goes on along its tangent, so that a wild first guess cannot overflow.
            const ex = g0 * Math.exp(Math.min(x, 60));
            ig = (x > 60 ? ex * (x - 59) : ex) - g2;
            dig = ex * g1;
          } else if (gridCode === GRID_RECTIFIER) {
            dig = vg > 0 ? g0 : 0;
            ig = dig * vg;
          } else {
            const d = vg - g3;
            ig = g0 + (g1 + g2 * d) * d;
            dig = g1 + 2 * g2 * d;
          }
          // Plate current and its slopes.
          if (plateCode === PLATE_TUBE) {
            const u = vg + overMu * vp + phi;
            const x = p1 * u;
            let ik = 0;
            let dik = 0;
            if (x > -60) {
              let y = u;
              let sigma = 1;
              if (x < 40) {
                const ex = Math.exp(x);
                y = Math.log1p(ex) / p1;
                sigma = ex / (1 + ex);
              }
              if (plateThreeHalves) {
                const root = p0 * Math.sqrt(y);
                ik = root * y;
                dik = 1.5 * root * sigma;
              } else {
                ik = p0 * y ** p2;
                dik = ((p2 * ik) / y) * sigma;
              }
            }
            dik *= slowFactor;
            ip = ik * slowFactor - ig;
            dpg = dik - dig;
            dpp = dik * overMu;
          } else if (plateCode === PLATE_STRAIGHT) {
            ip = p0 + p1 * vg + p2 * vp - ig;
            dpg = p1 - dig;
            dpp = p2;
          } else ip = 0;

          // Newton on v − open + Z·i(v) = 0.
          const rg = vg - gOpen + zgg * ig + zgp * ip;
          const rp = vp - pOpen + zpg * ig + zpp * ip;
          const j11 = 1 + zgg * dig + zgp * dpg;
          const j12 = zgp * dpp;
          const j21 = zpg * dig + zpp * dpg;
          const j22 = 1 + zpp * dpp;
          const det = j11 * j22 - j12 * j21;
          const dg = (j12 * rp - j22 * rg) / det;
          const dp = (j21 * rg - j11 * rp) / det;
          const wasOn = vg > 0;
          vg += dg;
          vp += dp;
          const du = dg + overMu * dp;
          ig += dig * dg;
          ip += dpg * dg + dpp * dp;
          passes++;
          // The law's curvature times the square of the move is what the linearised current leaves out.
          const left = dig * gridBend * dg * dg + Math.abs(g2 * dg * dg) * (gridCode > GRID_RECTIFIER ? 1 : 0);
          const leftPlate = Math.abs(dpg + dig) * plateBend * du * du;
          if (
            left <= LAW_TOLERANCE * gridPeak + 1e-15 &&
            leftPlate <= LAW_TOLERANCE * platePeak + 1e-14 &&
            (gridCode !== GRID_RECTIFIER || wasOn === vg > 0)
          )
            break;
          if (pass >= MAX_PASSES) throw new RangeError('the reference did not settle within one step');
        }
        gC = gB;
        gB = gA;
        gA = ig;
        pC = pB;
        pB = pA;
        pA = ip;
        gridPeak = Math.max(gridPeak * 0.999, ig);
        platePeak = Math.max(platePeak * 0.999, ip);

        // New state, and what is watched.
        let v = seenHeld + seenDrive * e - seenG * ig - seenP * ip;
        for (let r = 0; r < n; r++) {
          v += seenRow[r]! * state[r]!;
          let w = stepHeld[r]! + stepDrive[r]! * e - stepPort[2 * r]! * ig - stepPort[2 * r + 1]! * ip;
          const base = r * n;
          for (let q = 0; q < n; q++) w += step[base + q]! * state[q]!;
          next[r] = w;
        }
        for (let r = 0; r < n; r++) state[r] = next[r]!;

        if (!isFrozen) {
          slowSum += vp - slowRing[k]!;
          slowRing[k] = vp;
          const slow = slowSum / stepsPerCycle;
          // Above 30 V the factor is 1 within 1e-17.
          slowFactor = slow > 30 ? 1 : slow > 0 ? Math.tanh(slow / knee) : 0;
        }
        gridSum += vg;
        plateSum += vp;
        seenSum += v;
        gridCos += vg * cosine;
        gridSin += vg * sine;
        plateCos += vp * cosine;
        plateSin += vp * sine;
        seenCos += v * cosine;
        seenSin += v * sine;
        gridAmps += ig;
        plateAmps += ip;
      }
      gridCycle += gridSum;
      plateCycle += plateSum;
      seenCycle += seenSum;
      if (blockRoom > 0) {
        blocks[blockAt] = gridSum * overBlock;
        blocks[blockAt + 1] = plateSum * overBlock;
        blocks[blockAt + 2] = seenSum * overBlock;
        blockAt = blockAt + 3 === blockRoom ? 0 : blockAt + 3;
      }
    }
    memory[SUM_GRID_COS]! += gridCos;
    memory[SUM_GRID_SIN]! += gridSin;
    memory[SUM_PLATE_COS]! += plateCos;
    memory[SUM_PLATE_SIN]! += plateSin;
    memory[SUM_SEEN_COS]! += seenCos;
    memory[SUM_SEEN_SIN]! += seenSin;
    memory[SUM_GRID_AMPS]! += gridAmps;
    memory[SUM_PLATE_AMPS]! += plateAmps;
    memory[SUM_GRID]! += gridCycle;
    memory[SUM_PLATE]! += plateCycle;
    memory[SUM_SEEN]! += seenCycle;
    s.cycle = s.cycle + 1 === s.cyclesPerPeriod ? 0 : s.cycle + 1;
  }
  memory[OLD_GRID_AMPS] = gA;
  memory[OLD_GRID_AMPS + 1] = gB;
  memory[OLD_GRID_AMPS + 2] = gC;
  memory[OLD_PLATE_AMPS] = pA;
  memory[OLD_PLATE_AMPS + 1] = pB;
  memory[OLD_PLATE_AMPS + 2] = pC;
  memory[GRID_AMPS_PEAK] = gridPeak;
  memory[PLATE_AMPS_PEAK] = platePeak;
  memory[SLOW_SUM] = slowSum;
  memory[STEPS]! += cycles * stepsPerCycle;
  memory[PASSES]! += passes;
  s.blockAt = blockAt;
  for (let r = 0; r < n; r++) {
    if (!Number.isFinite(state[r]!)) throw new RangeError('the reference ran away');
  }
}
