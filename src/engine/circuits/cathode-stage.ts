import type { CarrierPorts } from './carrier-path.ts';
import { portsAt } from './carrier-ports.ts';
import type { DetectorCircuit } from './circuit.ts';
import type { AudioStage } from './grid-leak.ts';
import { CATHODE, Network } from './network.ts';
import { type OutputSide, stampOutput } from './output-stage.ts';
import { type IdealParts, type PlateSide, probeOf, stampPlateSide } from './plate-network.ts';

/** Resistance of the coil's winding, through which the grid is at the level of its far end, ohms. */
const WINDING_OHMS = 1;
/** What stands between plate and supply where the plate is bypassed for carrier and audio, ohms. */
const STOPPER_OHMS = 100;

interface CathodeStage {
  readonly grid: number;
  readonly plate: number;
  readonly chassis: number;
  readonly side: PlateSide;
}

/**
 * Stamps a plate-bend or infinite-impedance detector. The network's reference is the tube's cathode, so the chassis is a
 * node of its own where something stands in the cathode lead.
 */
function stampStage(network: Network, circuit: DetectorCircuit, ideal: IdealParts): CathodeStage {
  const { detector, tube, plate: plateParts, output } = circuit;
  const { ohms, farads } = detector.cathode ?? { ohms: null, farads: 0 };
  const follower = detector.kind === 'infinite impedance';
  const chassis = ohms === null ? CATHODE : network.node();
  if (ohms !== null) {
    network.resistor(chassis, CATHODE, ohms);
    // of a follower the capacitor is the bypass; of plate bend it belongs to the load, and is endless when perfect
    if (follower ? !ideal.plateBypass : !ideal.load) network.capacitor(chassis, CATHODE, farads);
    else if (!follower) network.resistor(chassis, CATHODE, 1e-3);
  }
  const grid = network.node();
  const plate = network.node();
  network.capacitor(grid, CATHODE, tube.gridCathodeFarads);
  network.capacitor(grid, plate, tube.gridPlateFarads);
  if (!follower) return { grid, plate, chassis, side: stampPlateSide(network, plate, circuit, ideal, chassis) };
  network.capacitor(plate, CATHODE, tube.plateCathodeFarads);
  network.resistor(plate, network.fixed(plateParts.supplyVolts, chassis), plateParts.dropping?.ohms ?? STOPPER_OHMS);
  network.capacitor(plate, chassis, plateParts.dropping?.farads ?? plateParts.bypassFarads);
  const { heard, coupledNode }: OutputSide = stampOutput(network, CATHODE, output, ideal.load === true, chassis);
  const chassisNode = chassis === CATHODE ? null : chassis;
  return {
    grid,
    plate,
    chassis,
    side: { heard, points: { chassisNode, feedNode: null, loadNode: plate, coupledNode } },
  };
}

/** The audio network: the coil is a short, so the grid is at the chassis, or at its bias against it. */
export function cathodeStageAudio(circuit: DetectorCircuit, ideal: IdealParts = {}): AudioStage {
  const network = new Network();
  const { grid, plate, chassis, side } = stampStage(network, circuit, ideal);
  network.resistor(grid, network.fixed(circuit.detector.cathode?.biasVolts ?? 0, chassis), WINDING_OHMS);
  const output = probeOf(network, side.heard);
  return { system: network.assemble(), gridNode: grid, plateNode: plate, output, points: side.points };
}

/** What the stage's linear part does at the station's carrier. */
export function cathodeStageCarrier(circuit: DetectorCircuit): CarrierPorts {
  const network = new Network();
  const { grid, plate, chassis } = stampStage(network, circuit, {});
  const source = network.source(grid, chassis);
  return portsAt(network, source, grid, plate, circuit.station.carrierHertz);
}
