import { InputError } from '../errors.ts';
import { CarrierPath } from './carrier-path.ts';
import type { DetectorCircuit, PlateLoad } from './circuit.ts';
import type { Complex } from './complex.ts';
import { solveReal } from './dense-solve.ts';
import { detectorAudio, detectorCarrier } from './detector-network.ts';
import type { AudioStage } from './grid-leak.ts';
import { loadAtCurrent } from './load-transformer.ts';
import { emptyCurrents, Stage, type StageCurrents, type StageLaws } from './stage-currents.ts';
import { detectorStageLaws, linearGrid, type QuietPoint, squareGrid, straightPlate } from './stage-laws.ts';
import { loadTunedCircuit, type TunedState } from './tuned-circuit.ts';

/** A circuit at rest: carrier on, no modulation. */
export interface RestPoint {
  readonly circuit: DetectorCircuit;
  readonly laws: StageLaws;
  /** The tube with no carrier, about which a textbook law is straight; null for the tube's own law. */
  readonly quiet: QuietPoint | null;
  readonly path: CarrierPath;
  readonly audio: AudioStage;
  readonly gridVolts: number;
  readonly plateVolts: number;
  readonly currents: StageCurrents;
  readonly tuned: TunedState;
  /** V_g/E, V_p/E and the admittance the detector shows to the tuned circuit. */
  readonly phasors: { readonly grid: Complex; readonly plate: Complex; readonly input: Complex };
  /** Largest error of the node equations, A. */
  readonly residualAmps: number;
  /** All unknowns of the audio network at rest. */
  readonly unknowns: Float64Array;
}

/** Open-circuit port volts and port resistances at DC: v = open − R·i. */
interface DirectPath {
  readonly open: readonly [number, number];
  readonly ohms: readonly [number, number, number, number];
}

function directPath(audio: AudioStage): DirectPath {
  const { system, gridNode, plateNode } = audio;
  const n = system.size;
  const y = new Float64Array(n * 3);
  for (let r = 0; r < n; r++) y[r * 3] = system.drive[r] as number;
  y[gridNode * 3 + 1] = 1;
  y[plateNode * 3 + 2] = 1;
  if (!solveReal(system.conductance.slice(), n, y, 3)) {
    throw new InputError({
      code: 'no-direct-path',
      where: 'circuit',
      got: 'a node with no path for direct current',
      expected: 'a resistor to every node',
    });
  }
  const at = (node: number, k: number): number => y[node * 3 + k] as number;
  return {
    open: [at(gridNode, 0), at(plateNode, 0)],
    ohms: [at(gridNode, 1), at(gridNode, 2), at(plateNode, 1), at(plateNode, 2)],
  };
}

/**
 * Times that the stage may be worked out in one search for rest: a circuit that comes to rest takes some hundred, one
 * that does not could go on for minutes.
 */
const MOST_EVALUATIONS = 5000;

/** What is left of them. */
interface Effort {
  left: number;
}

/** Newton from a start; shortens a step that makes matters worse. Returns the residual in volts, or infinity. */
function settle(
  stage: Stage,
  path: DirectPath,
  peak: number,
  w: [number, number],
  out: StageCurrents,
  effort: Effort,
): number {
  const [r11, r12, r21, r22] = path.ohms;
  const error = (v: number, p: number): [number, number] => {
    effort.left--;
    if (!stage.evaluate(v, p, peak, out)) return [Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY];
    return [
      v - path.open[0] + r11 * out.gridAmps + r12 * out.plateAmps,
      p - path.open[1] + r21 * out.gridAmps + r22 * out.plateAmps,
    ];
  };
  let [e1, e2] = error(w[0], w[1]);
  for (let pass = 0; pass < 200 && effort.left > 0; pass++) {
    const size = Math.hypot(e1, e2);
    if (size < 1e-12 * (1 + Math.abs(path.open[1]) + Math.abs(w[0]))) return size;
    const j11 = 1 + r11 * out.gridByGrid + r12 * out.plateByGrid;
    const j12 = r11 * out.gridByPlate + r12 * out.plateByPlate;
    const j21 = r21 * out.gridByGrid + r22 * out.plateByGrid;
    const j22 = 1 + r21 * out.gridByPlate + r22 * out.plateByPlate;
    const det = j11 * j22 - j12 * j21;
    const d1 = (j22 * e1 - j12 * e2) / det;
    const d2 = (j11 * e2 - j21 * e1) / det;
    let share = 1;
    let [v, p] = [w[0], w[1]];
    for (let halving = 0; halving < 40; halving++) {
      v = w[0] - share * d1;
      p = w[1] - share * d2;
      [e1, e2] = error(v, p);
      if (Math.hypot(e1, e2) < size || share < 1e-11) break;
      share *= 0.5;
    }
    if (!Number.isFinite(e1) || !Number.isFinite(e2)) return Number.POSITIVE_INFINITY;
    if (share < 1e-11) return size;
    w[0] = v;
    w[1] = p;
  }
  return Math.hypot(e1, e2);
}

/** Finds the DC point for a given carrier at the tuned circuit by raising the carrier from nothing. */
function restAtPeak(
  stage: Stage,
  path: DirectPath,
  peak: number,
  w: [number, number],
  out: StageCurrents,
  effort: Effort,
): void {
  const goal = 1e-9 * (1 + Math.abs(path.open[1]));
  const start: [number, number] = [w[0], w[1]];
  if (settle(stage, path, peak, start, out, effort) <= goal) {
    w[0] = start[0];
    w[1] = start[1];
    return;
  }
  let reached = 0;
  let step = 0.25;
  let state: [number, number] = [Math.min(path.open[0], 0), 0.5 * path.open[1]];
  settle(stage, path, 0, state, out, effort);
  while (reached < 1) {
    const next = Math.min(1, reached + step);
    const trial: [number, number] = [state[0], state[1]];
    if (settle(stage, path, peak * next, trial, out, effort) <= goal) {
      reached = next;
      state = trial;
      step *= 1.6;
    } else {
      step *= 0.5;
      if (step < 1e-5 || effort.left <= 0) {
        throw new InputError({
          code: 'no-rest-point',
          where: 'circuit',
          got: 'no direct-current solution',
          expected: 'values that let the tube come to rest',
          hint: 'check the leak, the plate load and the supply for a slipped decimal',
        });
      }
    }
  }
  w[0] = state[0];
  w[1] = state[1];
}

/**
 * Solves the rest point of a grid-leak detector: direct currents, carrier at grid and plate, and for a coil as built
 * the level and loaded Q that the detector leaves.
 *
 * Raises InputError `no-rest-point`, `oscillates` (the detector's negative input conductance outweighs the coil).
 */
export function restPoint(circuit: DetectorCircuit): RestPoint {
  const { load } = circuit.plate;
  if (load.kind !== 'transformer' || load.falling === null) return solveRest(circuit);
  // the inductance shapes nothing at DC, so two rounds settle what current and inductance make of each other
  let at = solveRest(withLoad(circuit, loadAtCurrent(load, 0)));
  for (let round = 0; round < 2; round++) {
    at = solveRest(withLoad(circuit, loadAtCurrent(load, at.currents.plateAmps)));
  }
  return at;
}

function withLoad(circuit: DetectorCircuit, load: PlateLoad): DetectorCircuit {
  return { ...circuit, plate: { ...circuit.plate, load } };
}

function solveRest(circuit: DetectorCircuit): RestPoint {
  const audio = detectorAudio(circuit);
  const direct = directPath(audio);
  const tubeLaws = detectorStageLaws(circuit);
  const path = new CarrierPath(detectorCarrier(circuit), tubeLaws.mu);
  const w: [number, number] = [Math.min(direct.open[0], 0), 0.5 * direct.open[1]];
  const currents = emptyCurrents();
  const effort: Effort = { left: MOST_EVALUATIONS };
  const quiet = new Stage(tubeLaws, path);
  let laws = tubeLaws;
  let quietPoint: QuietPoint | null = null;
  if (circuit.detector.law !== 'tube') {
    restAtPeak(quiet, direct, 0, w, currents, effort);
    quietPoint = {
      gridVolts: w[0],
      plateVolts: w[1],
      cathodeAmps: currents.plateAmps + currents.gridAmps,
      cathodeSiemens: currents.heldPlateByGrid + currents.heldGridByGrid,
      kneeSiemens:
        currents.heldPlateByPlate - (currents.heldPlateByGrid + currents.heldGridByGrid) / circuit.tube.law.mu,
    };
    const plate = straightPlate(circuit.tube.law, quietPoint);
    const grid = circuit.detector.law === 'square' ? squareGrid(circuit.tube.law, w[0]) : linearGrid(circuit);
    laws = { ...plate, grid };
  }
  const stage = new Stage(laws, path);
  const inputAt = (peak: number): Complex => {
    restAtPeak(stage, direct, peak, w, currents, effort);
    return path.phasors(currents.gridChord, currents.tubeChord).input;
  };
  const tuned = loadTunedCircuit(circuit, inputAt);
  const input = inputAt(tuned.carrierPeakVolts);
  const { unknowns, residualAmps } = allUnknowns(audio, w, currents);
  const phasors = path.phasors(currents.gridChord, currents.tubeChord);
  return {
    circuit,
    laws,
    quiet: quietPoint,
    path,
    audio,
    gridVolts: w[0],
    plateVolts: w[1],
    currents: {
      ...currents,
      gridChordBy: [...currents.gridChordBy],
      tubeChordBy: [...currents.tubeChordBy],
    },
    tuned: { ...tuned, input },
    phasors,
    residualAmps,
    unknowns,
  };
}

/**
 * The direct volts of every unknown with one more conductance between two nodes, S, such as a meter's; null is the
 * cathode. The carrier at the tuned circuit is held. Raises InputError `no-rest-point`.
 */
export function restWith(rest: RestPoint, from: number | null, to: number | null, siemens: number): Float64Array {
  const { audio } = rest;
  const n = audio.system.size;
  const conductance = audio.system.conductance.slice();
  const add = (row: number | null, column: number | null, value: number): void => {
    if (row === null || column === null) return;
    conductance[row * n + column] = (conductance[row * n + column] as number) + value;
  };
  add(from, from, siemens);
  add(to, to, siemens);
  add(from, to, -siemens);
  add(to, from, -siemens);
  const loaded = { ...audio, system: { ...audio.system, conductance } };
  const w: [number, number] = [rest.gridVolts, rest.plateVolts];
  const currents = emptyCurrents();
  restAtPeak(new Stage(rest.laws, rest.path), directPath(loaded), rest.tuned.carrierPeakVolts, w, currents, {
    left: MOST_EVALUATIONS,
  });
  return allUnknowns(loaded, w, currents).unknowns;
}

/** Every unknown of the network at rest, and the largest error of its node equations with the laws put back. */
function allUnknowns(
  audio: AudioStage,
  w: readonly [number, number],
  currents: StageCurrents,
): { unknowns: Float64Array; residualAmps: number } {
  const { system, gridNode, plateNode } = audio;
  const n = system.size;
  const z = system.drive.slice();
  z[gridNode] = (z[gridNode] as number) - currents.gridAmps;
  z[plateNode] = (z[plateNode] as number) - currents.plateAmps;
  const drawn = z.slice();
  solveReal(system.conductance.slice(), n, z, 1);
  z[gridNode] = w[0];
  z[plateNode] = w[1];
  let residualAmps = 0;
  for (let r = 0; r < n; r++) {
    let sum = -(drawn[r] as number);
    for (let c = 0; c < n; c++) sum += (system.conductance[r * n + c] as number) * (z[c] as number);
    residualAmps = Math.max(residualAmps, Math.abs(sum));
  }
  return { unknowns: z, residualAmps };
}
