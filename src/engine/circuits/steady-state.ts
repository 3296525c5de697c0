import { InputError } from '../errors.ts';
import { complex, over } from './complex.ts';
import { solveComplex, solveReal } from './dense-solve.ts';
import { LinearResponse } from './response.ts';
import type { RestPoint } from './rest-point.ts';
import { emptyCurrents, Stage } from './stage-currents.ts';
import { agreedEnvelope, atTwiceTheInstants, type PeriodicEnvelope, writeAdmittance } from './tank-tone.ts';
import type { Tank } from './tuned-circuit.ts';

/** A steady tone through the detector, all its harmonics. */
export interface SteadyTone {
  /** Peak volts of harmonics 1, 2, … at the output, the grid and the plate; index 0 holds the mean (rest included). */
  readonly output: Float64Array;
  readonly grid: Float64Array;
  readonly plate: Float64Array;
  /** Largest error of the port equations left, V. */
  readonly residualVolts: number;
}

/** Harmonics whose magnitudes are given. */
const HARMONICS = 10;

/** The network's answer to port currents at the harmonics of one tone. */
interface HarmonicPaths {
  /** Impedances from current k to row r (grid, plate, output) at harmonic h: [h][6] pairs of re, im. */
  readonly ohms: readonly Float64Array[];
  /** Port and output volts with no port current. */
  readonly open: readonly [number, number, number];
}

function harmonicPaths(rest: RestPoint, hertz: number, highest: number): HarmonicPaths {
  const { system, gridNode, plateNode, output } = rest.audio;
  const n = system.size;
  const open = system.drive.slice();
  solveReal(system.conductance.slice(), n, open, 1);
  const rows = [gridNode, plateNode, output.index];
  const ohms: Float64Array[] = [];
  for (let h = 0; h <= highest; h++) {
    const im = system.storage.map((farads) => farads * 2 * Math.PI * hertz * h);
    const at = new Float64Array(12);
    [gridNode, plateNode].forEach((node, k) => {
      const x = new Float64Array(2 * n);
      x[node] = 1;
      solveComplex(system.conductance, im, n, x);
      rows.forEach((row, r) => {
        at[4 * r + 2 * k] = x[row] as number;
        at[4 * r + 2 * k + 1] = x[n + row] as number;
      });
    });
    ohms.push(at);
  }
  return { ohms, open: [open[gridNode] as number, open[plateNode] as number, open[output.index] as number] };
}

const MOST_SAMPLES = 128;
/**
 * Instants at which the stage may be worked out for one tone before the search is given up: a circuit that settles takes
 * well under half of it, one that does not would go on for minutes.
 */
const MOST_EVALUATIONS = 16_000;

/** How finely a steady tone is solved. */
export interface ToneFineness {
  /** Instants a period to begin with, a power of two from 16. */
  readonly instants: number;
  /** Largest harmonic in the upper half of the sampled band, re the fundamental, at which there are enough of them. */
  readonly tailShare: number;
  /** Error of the port equations at which Newton's search ends, V. */
  readonly residualVolts: number;
  /** Change of the envelope at which coil and detector agree, as a share. */
  readonly agreedShare: number;
}

/** For what is quoted of one circuit. */
const QUOTED: ToneFineness = { instants: 32, tailShare: 2e-6, residualVolts: 1e-11, agreedShare: 1e-8 };

/**
 * For hundreds of circuits in a row: the lower harmonics need few instants, and the second one stays within a thousandth
 * of its value even where a kink leaves 5 % in the upper half of the band. Three to five times as quick.
 */
export const SURVEYED: ToneFineness = { instants: 16, tailShare: 0.05, residualVolts: 1e-8, agreedShare: 1e-5 };

/**
 * The full nonlinear steady state for a tone: the averaged laws by quadrature at equally spaced instants of one audio
 * period, the network at each harmonic, Newton on both. No time stepping, no tables: a second way to the renderer's
 * answer. The depth is raised from nothing when a direct solution fails, and the instants are doubled when the port
 * volts still have something in the upper half of the sampled band (kinks such as clipping).
 *
 * @param hertz  audio frequency, above 0
 * @param depth  modulation at the station, 0 to 1
 * @param fineness  with fewer than 32 instants at the end, harmonics above the seventh are 0
 * Raises InputError `no-steady-state`.
 */
export function steadyTone(rest: RestPoint, hertz: number, depth: number, fineness = QUOTED): SteadyTone {
  let start: Start | null = null;
  const effort = { left: MOST_EVALUATIONS };
  for (let samples = fineness.instants; ; samples *= 2) {
    const { tone, tail, reached } = steadyToneAt(rest, hertz, depth, samples, start, fineness, effort);
    if (tail < fineness.tailShare || samples >= MOST_SAMPLES) return tone;
    start = {
      w: interleavedTwice(reached.w),
      envelope: { re: atTwiceTheInstants(reached.envelope.re), im: atTwiceTheInstants(reached.envelope.im) },
    };
  }
}

/** Where a search begins: port volts and envelope at every instant. */
interface Start {
  readonly w: Float64Array;
  readonly envelope: PeriodicEnvelope;
}

/** Port volts, two at every instant, at twice the instants. */
function interleavedTwice(w: Float64Array): Float64Array {
  const [grid, plate] = [0, 1].map((port) => atTwiceTheInstants(w.filter((_, k) => k % 2 === port)));
  return Float64Array.from(
    { length: 2 * w.length },
    (_, k) => ((k % 2 === 0 ? grid : plate) as Float64Array)[k >> 1] as number,
  );
}

/** What the search for the port volts of one tone works with. */
interface Ports {
  readonly rest: RestPoint;
  readonly paths: HarmonicPaths;
  readonly impulse: Float64Array;
  /** One an instant: each begins its search for the carrier's amplitudes where it ended the last one. */
  readonly stages: readonly Stage[];
  readonly fineness: ToneFineness;
  /** Instants that may still be worked out. */
  readonly effort: { left: number };
}

function steadyToneAt(
  rest: RestPoint,
  hertz: number,
  depth: number,
  samples: number,
  start: Start | null,
  fineness: ToneFineness,
  effort: { left: number },
): { tone: SteadyTone; tail: number; reached: Start } {
  const highest = samples / 2 - 1;
  const paths = harmonicPaths(rest, hertz, highest);
  const w = start?.w ?? startFromLinear(rest, hertz, depth, samples);
  let envelope = start?.envelope ?? envelopeOf(rest, hertz, depth, samples);
  const stages = Array.from({ length: samples }, () => new Stage(rest.laws, rest.path));
  const ports: Ports = { rest, paths, impulse: impulseOhms(paths, samples), stages, fineness, effort };
  let found: Found;
  if (rest.tuned.tank) {
    ({ found, envelope } = solveWithTank(ports, rest.tuned.tank, hertz, depth, w, envelope));
  } else {
    const envelopeAt = (share: number): Float64Array => peaksOf(rest, envelopeOf(rest, hertz, depth * share, samples));
    found = solveRaised(ports, envelopeAt, w);
  }
  if (!(found.residual < 1e-5)) {
    throw new InputError({
      code: 'no-steady-state',
      where: `tone ${hertz} Hz, ${Math.round(depth * 100)} % modulation`,
      got: 'no settled solution',
      expected: 'values for which the detector settles',
    });
  }
  const { weight } = rest.audio.output;
  const tone = { ...readHarmonics(paths, w, found.currents, samples, weight), residualVolts: found.residual };
  const tail = Math.max(tailShare(w, 0, samples), tailShare(w, 1, samples));
  return { tone, tail, reached: { w, envelope } };
}

/** Solves the ports under an envelope; when that fails at once, by raising the depth from nothing. */
function solveRaised(ports: Ports, envelopeAt: (share: number) => Float64Array, w: Float64Array): Found {
  const { rest, fineness } = ports;
  let found = solveAt(ports, envelopeAt(1), w);
  if (found.residual < 100 * fineness.residualVolts) return found;
  for (let k = 0; k < w.length; k += 2) {
    w[k] = rest.gridVolts;
    w[k + 1] = rest.plateVolts;
  }
  for (let part = 1; part <= 16 && ports.effort.left > 0; part++) found = solveAt(ports, envelopeAt(part / 16), w);
  // stopped on the way, it is the solution of another envelope
  return ports.effort.left > 0 ? found : { ...found, residual: Number.POSITIVE_INFINITY };
}

/** Ports and coil together: the ports under an envelope, the coil under the admittance they give, until they agree. */
function solveWithTank(
  ports: Ports,
  tank: Tank,
  hertz: number,
  depth: number,
  w: Float64Array,
  start: PeriodicEnvelope,
): { found: Found; envelope: PeriodicEnvelope } {
  const { rest, fineness } = ports;
  const samples = w.length / 2;
  const y: PeriodicEnvelope = { re: new Float64Array(samples), im: new Float64Array(samples) };
  const atRest = rest.phasors.input;
  let found: Found | null = null;
  const { left, envelope: agreed } = agreedEnvelope(tank, hertz, depth, start, fineness.agreedShare, (envelope) => {
    const peaks = peaksOf(rest, envelope);
    found = solveRaised(ports, (share) => shrunk(rest, peaks, share), w);
    for (let k = 0; k < samples; k++) {
      const { input } = rest.path.phasors(found.chords[2 * k] as number, found.chords[2 * k + 1] as number);
      writeAdmittance(y, k, input, atRest);
    }
    return y;
  });
  const solved = found as Found | null;
  if (solved === null) throw new Error('no round was taken');
  return { found: left < 100 * fineness.agreedShare ? solved : { ...solved, residual: left }, envelope: agreed };
}

/** An envelope brought towards the rest peak. */
function shrunk(rest: RestPoint, peaks: Float64Array, share: number): Float64Array {
  const middle = rest.tuned.carrierPeakVolts;
  return share === 1 ? peaks : peaks.map((peak) => middle + share * (peak - middle));
}

/** Peak carrier of an envelope, V. */
function peaksOf(rest: RestPoint, envelope: PeriodicEnvelope): Float64Array {
  const peak = rest.tuned.carrierPeakVolts;
  return envelope.re.map((re, k) => peak * Math.hypot(re, envelope.im[k] as number));
}

/** Largest of three harmonics in the upper half of the sampled band, re the fundamental, at one port. */
function tailShare(w: Float64Array, port: number, samples: number): number {
  let largest = 0;
  let fundamental = 0;
  for (const h of [1, samples / 4, samples / 4 + 1, (3 * samples) / 8]) {
    let re = 0;
    let im = 0;
    for (let k = 0; k < samples; k++) {
      const angle = (2 * Math.PI * h * k) / samples;
      re += (w[2 * k + port] as number) * Math.cos(angle);
      im += (w[2 * k + port] as number) * Math.sin(angle);
    }
    const size = Math.hypot(re, im);
    if (h === 1) fundamental = size;
    else largest = Math.max(largest, size);
  }
  return fundamental > 0 ? largest / fundamental : 0;
}

/** The envelope over one period for a tone through the loaded Q of the rest point, 1 at rest. */
function envelopeOf(rest: RestPoint, hertz: number, depth: number, samples: number): PeriodicEnvelope {
  const { tuned, circuit } = rest;
  const f0 = circuit.station.carrierHertz;
  const pole = (offset: number): { re: number; im: number } => complex(1, (2 * tuned.loadedQ * offset) / f0);
  const carrier = pole(tuned.detuneHertz);
  const upper = over(carrier, pole(tuned.detuneHertz + hertz));
  const lower = over(carrier, pole(tuned.detuneHertz - hertz));
  const re = new Float64Array(samples);
  const im = new Float64Array(samples);
  for (let k = 0; k < samples; k++) {
    const angle = (2 * Math.PI * k) / samples;
    const c = Math.cos(angle);
    const s = Math.sin(angle);
    re[k] = 1 + (depth / 2) * (upper.re * c - upper.im * s + lower.re * c + lower.im * s);
    im[k] = (depth / 2) * (upper.re * s + upper.im * c + lower.im * c - lower.re * s);
  }
  return { re, im };
}

/** Port volts in time from the linearised response: where Newton starts. */
function startFromLinear(rest: RestPoint, hertz: number, depth: number, samples: number): Float64Array {
  const linear = new LinearResponse(rest).at(hertz);
  const w = new Float64Array(2 * samples);
  for (let k = 0; k < samples; k++) {
    const angle = (2 * Math.PI * k) / samples;
    const c = Math.cos(angle);
    const s = Math.sin(angle);
    w[2 * k] = rest.gridVolts + depth * (linear.grid.re * c - linear.grid.im * s);
    w[2 * k + 1] = rest.plateVolts + depth * (linear.plate.re * c - linear.plate.im * s);
  }
  return w;
}

/** The network as a periodic impulse response: volts at lag d for one ampere at one instant, [lag][4]. */
function impulseOhms(paths: HarmonicPaths, samples: number): Float64Array {
  const out = new Float64Array(4 * samples);
  for (let lag = 0; lag < samples; lag++) {
    for (let q = 0; q < 4; q++) {
      const at = 2 * q;
      let sum = (paths.ohms[0] as Float64Array)[at] as number;
      for (let h = 1; h < paths.ohms.length; h++) {
        const angle = (2 * Math.PI * h * lag) / samples;
        const z = paths.ohms[h] as Float64Array;
        sum += 2 * ((z[at] as number) * Math.cos(angle) - (z[at + 1] as number) * Math.sin(angle));
      }
      out[4 * lag + q] = sum / samples;
    }
  }
  return out;
}

interface Found {
  residual: number;
  currents: Float64Array;
  /** Chords of grid and tube at every instant, S. */
  chords: Float64Array;
}

/** Newton on the port volts of one period; `w` moves to the solution. */
function solveAt(ports: Ports, envelope: Float64Array, w: Float64Array): Found {
  const { paths, impulse, stages, effort } = ports;
  const { residualVolts } = ports.fineness;
  const samples = envelope.length;
  const size = 2 * samples;
  const out = emptyCurrents();
  const currents = new Float64Array(size);
  const chords = new Float64Array(size);
  const slopes = new Float64Array(2 * size);
  const error = new Float64Array(size);
  const evaluate = (trial: Float64Array): number => {
    effort.left -= samples;
    for (let k = 0; k < samples; k++) {
      (stages[k] as Stage).evaluate(trial[2 * k] as number, trial[2 * k + 1] as number, envelope[k] as number, out);
      currents[2 * k] = out.gridAmps;
      currents[2 * k + 1] = out.plateAmps;
      chords[2 * k] = out.gridChord;
      chords[2 * k + 1] = out.tubeChord;
      slopes[4 * k] = out.gridByGrid;
      slopes[4 * k + 1] = out.gridByPlate;
      slopes[4 * k + 2] = out.plateByGrid;
      slopes[4 * k + 3] = out.plateByPlate;
    }
    let largest = 0;
    for (let k = 0; k < samples; k++) {
      for (let r = 0; r < 2; r++) {
        let sum = (trial[2 * k + r] as number) - (paths.open[r] as number);
        for (let j = 0; j < samples; j++) {
          const o = 4 * ((k - j + samples) % samples) + 2 * r;
          sum +=
            (impulse[o] as number) * (currents[2 * j] as number) +
            (impulse[o + 1] as number) * (currents[2 * j + 1] as number);
        }
        error[2 * k + r] = sum;
        largest = Math.max(largest, Math.abs(sum));
      }
    }
    return largest;
  };
  let residual = evaluate(w);
  const matrix = new Float64Array(size * size);
  const move = new Float64Array(size);
  const trial = new Float64Array(size);
  for (let pass = 0; pass < 40 && residual > residualVolts && effort.left > 0; pass++) {
    for (let k = 0; k < samples; k++) {
      for (let j = 0; j < samples; j++) {
        for (let r = 0; r < 2; r++) {
          const o = 4 * ((k - j + samples) % samples) + 2 * r;
          const z0 = impulse[o] as number;
          const z1 = impulse[o + 1] as number;
          for (let c = 0; c < 2; c++) {
            const value = z0 * (slopes[4 * j + c] as number) + z1 * (slopes[4 * j + 2 + c] as number);
            matrix[(2 * k + r) * size + 2 * j + c] = value + (k === j && r === c ? 1 : 0);
          }
        }
      }
    }
    move.set(error);
    if (!solveReal(matrix, size, move, 1)) break;
    let share = 1;
    let next = Number.POSITIVE_INFINITY;
    for (let halving = 0; halving < 12 && effort.left > 0; halving++) {
      for (let k = 0; k < size; k++) trial[k] = (w[k] as number) - share * (move[k] as number);
      next = evaluate(trial);
      if (next < residual) break;
      share *= 0.5;
    }
    if (!(next < residual)) {
      evaluate(w);
      break;
    }
    w.set(trial);
    residual = next;
  }
  return { residual, currents, chords };
}

/** Magnitudes of the harmonics of output (through the network) and ports. */
function readHarmonics(
  paths: HarmonicPaths,
  w: Float64Array,
  currents: Float64Array,
  samples: number,
  weight: number,
): Omit<SteadyTone, 'residualVolts'> {
  const output = new Float64Array(HARMONICS + 1);
  const grid = new Float64Array(HARMONICS + 1);
  const plate = new Float64Array(HARMONICS + 1);
  const highest = Math.min(HARMONICS, samples / 2 - 1);
  for (let h = 0; h <= highest; h++) {
    const sums = new Float64Array(8);
    for (let k = 0; k < samples; k++) {
      const angle = (2 * Math.PI * h * k) / samples;
      const c = Math.cos(angle) / samples;
      const s = -Math.sin(angle) / samples;
      const row = [currents[2 * k], currents[2 * k + 1], w[2 * k], w[2 * k + 1]] as number[];
      row.forEach((value, q) => {
        sums[2 * q] = (sums[2 * q] as number) + value * c;
        sums[2 * q + 1] = (sums[2 * q + 1] as number) + value * s;
      });
    }
    const z = paths.ohms[h] as Float64Array;
    const re =
      (z[8] as number) * (sums[0] as number) -
      (z[9] as number) * (sums[1] as number) +
      (z[10] as number) * (sums[2] as number) -
      (z[11] as number) * (sums[3] as number);
    const im =
      (z[8] as number) * (sums[1] as number) +
      (z[9] as number) * (sums[0] as number) +
      (z[10] as number) * (sums[3] as number) +
      (z[11] as number) * (sums[2] as number);
    const peak = h === 0 ? 1 : 2;
    output[h] = weight * (h === 0 ? paths.open[2] - re : peak * Math.hypot(re, im));
    grid[h] = h === 0 ? (sums[4] as number) : peak * Math.hypot(sums[4] as number, sums[5] as number);
    plate[h] = h === 0 ? (sums[6] as number) : peak * Math.hypot(sums[6] as number, sums[7] as number);
  }
  return { output, grid, plate };
}
