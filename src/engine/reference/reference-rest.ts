import type { DetectorCircuit } from '../circuits/circuit.ts';
import { checkReference } from './check-request.ts';
import { detectorNetwork } from './detector-wiring.ts';
import type { DetectorNetwork } from './grid-leak-network.ts';
import { packLaws, type StageLaws } from './instantaneous-laws.ts';
import { findPeriodicState } from './periodic-rest.ts';
import { coilDriveAmps, type ReferenceSource, tonePhasors } from './source-drive.ts';
import { type Companion, makeCompanion } from './trapezoidal-companion.ts';
import {
  advance,
  clearSums,
  makeStepper,
  type Stepper,
  SUM_GRID,
  SUM_GRID_AMPS,
  SUM_GRID_COS,
  SUM_GRID_SIN,
  SUM_PLATE,
  SUM_PLATE_AMPS,
  SUM_PLATE_COS,
  SUM_PLATE_SIN,
  SUM_SEEN_COS,
  SUM_SEEN_SIN,
} from './two-port-stepper.ts';

/** The stage with unmodulated carrier, settled. Volts and amperes are means over a carrier cycle. */
export interface ReferenceRest {
  readonly gridVolts: number;
  readonly plateVolts: number;
  readonly gridAmps: number;
  readonly plateAmps: number;
  readonly carrierAtGridVoltsRms: number;
  readonly carrierOnPlateVoltsRms: number;
  /** Between the detector's input and the foot of the coil. */
  readonly carrierAtTapVoltsRms: number;
  /** Current into the detector over the volts at its input, at the carrier. */
  readonly inputSiemens: { readonly re: number; readonly im: number };
}

export interface RestOptions {
  /** Steps in a carrier cycle, a multiple of 8; 96 unless given. */
  readonly stepsPerCycle?: number;
  readonly stage?: StageLaws;
}

/** A settled stage, for a run to go on from. */
export interface SettledStage {
  readonly wired: DetectorNetwork;
  readonly companion: Companion;
  readonly stepper: Stepper;
  readonly rest: ReferenceRest;
  readonly state: Float64Array;
  readonly peakDrive: number;
}

/**
 * Rest point with unmodulated carrier, by the reference's own cycle-by-cycle integration.
 *
 * Throws InputError for a request out of range, RangeError when the circuit has no rest point.
 */
export function referenceRest(
  circuit: DetectorCircuit,
  source: ReferenceSource,
  options: RestOptions = {},
): ReferenceRest {
  const stepsPerCycle = options.stepsPerCycle ?? 96;
  checkReference(circuit, source, stepsPerCycle, options.stage);
  return settleStage(circuit, source, circuit.station.carrierHertz, stepsPerCycle, options.stage).rest;
}

/** The same for a stated carrier, keeping the stepper. Not checked. */
export function settleStage(
  circuit: DetectorCircuit,
  source: ReferenceSource,
  carrierHertz: number,
  stepsPerCycle: number,
  stage: StageLaws | undefined,
): SettledStage {
  const h = 1 / (carrierHertz * stepsPerCycle);
  const wired = detectorNetwork(circuit, source, carrierHertz, h);
  const companion = makeCompanion(wired.network, wired.ports, h);
  const peakDrive =
    source.kind === 'stiff' ? source.levelVoltsRms * Math.SQRT2 : coilDriveAmps(circuit, source, carrierHertz);
  const drive = tonePhasors(peakDrive, 0, 0, carrierHertz, 0, 0);
  const stepper = makeStepper(
    companion,
    packLaws(circuit.tube, stage),
    stepsPerCycle,
    1,
    drive,
    companion.observe(wired.tap),
  );
  const supply = circuit.plate.supplyVolts;
  const start = new Map([
    [wired.plate, supply],
    [wired.grid, Math.min(0, circuit.detector.leakReturnVolts)],
  ]);
  stepper.state.set(companion.restState(start, source.kind === 'stiff' ? peakDrive : 0));
  findPeriodicState(stepper, supply);
  const state = stepper.state.slice();
  clearSums(stepper);
  advance(stepper, 1);
  const m = stepper.memory;
  const N = stepsPerCycle;
  const phasor = (cos: number, sin: number): readonly [number, number] => [(2 * m[cos]!) / N, (-2 * m[sin]!) / N];
  const [gr, gi] = phasor(SUM_GRID_COS, SUM_GRID_SIN);
  const [pr, pi] = phasor(SUM_PLATE_COS, SUM_PLATE_SIN);
  const [er, ei] = phasor(SUM_SEEN_COS, SUM_SEEN_SIN);
  const { detector } = circuit;
  const across = detector.leakPosition === 'across capacitor' ? 1 / detector.leakOhms : 0;
  const seriesRe = across + (detector.capacitorLeakageOhms === null ? 0 : 1 / detector.capacitorLeakageOhms);
  const seriesIm = (2 / h) * Math.tan(Math.PI / N) * detector.gridCapacitorFarads;
  const dr = er - gr;
  const di = ei - gi;
  const ir = seriesRe * dr - seriesIm * di;
  const ii = seriesRe * di + seriesIm * dr;
  const size = er * er + ei * ei;
  const rest: ReferenceRest = {
    gridVolts: m[SUM_GRID]! / N,
    plateVolts: m[SUM_PLATE]! / N,
    gridAmps: m[SUM_GRID_AMPS]! / N,
    plateAmps: m[SUM_PLATE_AMPS]! / N,
    carrierAtGridVoltsRms: Math.hypot(gr, gi) / Math.SQRT2,
    carrierOnPlateVoltsRms: Math.hypot(pr, pi) / Math.SQRT2,
    carrierAtTapVoltsRms: Math.sqrt(size / 2),
    inputSiemens: size > 0 ? { re: (ir * er + ii * ei) / size, im: (ii * er - ir * ei) / size } : { re: 0, im: 0 },
  };
  return { wired, companion, stepper, rest, state, peakDrive };
}
