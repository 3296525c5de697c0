import type { CarrierPorts } from './carrier-path.ts';
import { portsAt } from './carrier-ports.ts';
import type { DetectorCircuit } from './circuit.ts';
import { CATHODE, type LinearSystem, Network } from './network.ts';
import {
  type IdealParts,
  type MeterPoints,
  type PlateSide,
  type Probe,
  probeOf,
  stampPlateSide,
} from './plate-network.ts';

/** The grid-leak stage for audio: linear network with two ports, grid and plate, where the tube draws its currents. */
export interface AudioStage {
  readonly system: LinearSystem;
  readonly gridNode: number;
  readonly plateNode: number;
  readonly output: Probe;
  readonly points: MeterPoints;
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
  const { detector } = circuit;
  const network = new Network();
  const across = detector.leakPosition === 'across capacitor';
  const foot = network.fixed(across ? detector.leakReturnVolts : 0);
  const leakEnd = network.fixed(detector.leakReturnVolts);
  const { grid, plate, side } = stampStage(network, circuit, ideal, foot, leakEnd);
  const output = probeOf(network, side.heard);
  return { system: network.assemble(), gridNode: grid, plateNode: plate, output, points: side.points };
}

/** Stamps the stage from its tap on; `leakEnd` is where a leak to the cathode ends. */
function stampStage(
  network: Network,
  circuit: DetectorCircuit,
  ideal: IdealParts,
  tap: number,
  leakEnd: number,
): { grid: number; plate: number; side: PlateSide } {
  const { detector, tube } = circuit;
  const grid = network.node();
  const plate = network.node();
  network.capacitor(tap, grid, ideal.gridCapacitor ? 0 : detector.gridCapacitorFarads);
  if (detector.capacitorLeakageOhms !== null) network.resistor(tap, grid, detector.capacitorLeakageOhms);
  network.resistor(grid, detector.leakPosition === 'across capacitor' ? tap : leakEnd, detector.leakOhms);
  network.capacitor(grid, CATHODE, tube.gridCathodeFarads);
  network.capacitor(grid, plate, tube.gridPlateFarads);
  return { grid, plate, side: stampPlateSide(network, plate, circuit, ideal) };
}

/** What the stage's linear part does at the station's carrier. */
export function gridLeakCarrier(circuit: DetectorCircuit): CarrierPorts {
  const network = new Network();
  const tap = network.node();
  const { grid, plate } = stampStage(network, circuit, {}, tap, CATHODE);
  const source = network.source(tap, CATHODE);
  return portsAt(network, source, grid, plate, circuit.station.carrierHertz);
}
