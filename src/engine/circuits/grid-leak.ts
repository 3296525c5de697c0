import type { DetectorCircuit } from './circuit.ts';
import { type Complex, complex, plus } from './complex.ts';
import { CATHODE, type LinearSystem, Network } from './network.ts';
import { type IdealParts, type Probe, plateAdmittance, probeOf, stampPlateSide } from './plate-network.ts';

/** The grid-leak stage for audio: linear network with two ports, grid and plate, where the tube draws its currents. */
export interface AudioStage {
  readonly system: LinearSystem;
  readonly gridNode: number;
  readonly plateNode: number;
  readonly output: Probe;
}

/** Leak and capacitor leakage in parallel, as audio sees them, ohms. */
export function leakOhmsAtAudio(circuit: DetectorCircuit): number {
  const { leakOhms, capacitorLeakageOhms } = circuit.detector;
  return capacitorLeakageOhms === null ? leakOhms : 1 / (1 / leakOhms + 1 / capacitorLeakageOhms);
}

/**
 * Stamps the audio network. The coil is a short for audio, so the grid capacitor stands from grid to cathode; both
 * positions of the leak are the same for audio. A leak across the capacitor returns through the coil, and then the
 * coil's foot carries the return voltage and the capacitor's own leakage goes there too.
 */
export function gridLeakAudio(circuit: DetectorCircuit, ideal: IdealParts = {}): AudioStage {
  const { detector, tube } = circuit;
  const network = new Network();
  const grid = network.node();
  const plate = network.node();
  network.capacitor(grid, CATHODE, (ideal.gridCapacitor ? 0 : detector.gridCapacitorFarads) + tube.gridCathodeFarads);
  network.capacitor(grid, plate, tube.gridPlateFarads);
  network.resistor(grid, network.fixed(detector.leakReturnVolts), detector.leakOhms);
  if (detector.capacitorLeakageOhms !== null) {
    const foot = detector.leakPosition === 'across capacitor' ? detector.leakReturnVolts : 0;
    network.resistor(grid, network.fixed(foot), detector.capacitorLeakageOhms);
  }
  const heard = stampPlateSide(network, plate, circuit, ideal);
  return { system: network.assemble(), gridNode: grid, plateNode: plate, output: probeOf(network, heard) };
}

/** The constant admittances of the stage at the carrier, S. */
export interface CarrierAdmittances {
  /** Between tuned circuit and grid: grid capacitor, and what lies across it. */
  readonly series: Complex;
  /** All that hangs on the grid node but the tube's conduction. */
  readonly grid: Complex;
  /** Grid to plate. */
  readonly gridPlate: Complex;
  /** All that hangs on the plate node but the tube's conduction. */
  readonly plate: Complex;
}

/** Works out the stage's admittances at the station's carrier. */
export function carrierAdmittances(circuit: DetectorCircuit): CarrierAdmittances {
  const { detector, tube, station } = circuit;
  const omega = 2 * Math.PI * station.carrierHertz;
  const leak = 1 / detector.leakOhms;
  const across = detector.leakPosition === 'across capacitor';
  const leakage = detector.capacitorLeakageOhms === null ? 0 : 1 / detector.capacitorLeakageOhms;
  const series = complex((across ? leak : 0) + leakage, omega * detector.gridCapacitorFarads);
  const gridPlate = complex(0, omega * tube.gridPlateFarads);
  const toCathode = complex(across ? 0 : leak, omega * tube.gridCathodeFarads);
  return {
    series,
    grid: plus(plus(series, toCathode), gridPlate),
    gridPlate,
    plate: plus(plateAdmittance(circuit, station.carrierHertz), gridPlate),
  };
}
