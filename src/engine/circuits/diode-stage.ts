import type { CarrierPorts } from './carrier-path.ts';
import { portsAt } from './carrier-ports.ts';
import type { DetectorCircuit, DiodeParts } from './circuit.ts';
import type { AudioStage } from './grid-leak.ts';
import { CATHODE, Network } from './network.ts';
import { type OutputSide, stampOutput } from './output-stage.ts';
import { type IdealParts, probeOf } from './plate-network.ts';

/** Resistance of the coil's winding, through which the anode is at chassis level for audio, ohms. */
const WINDING_OHMS = 1;
/** The port that a tube's plate would have: it carries nothing, and stands where no knee matters. */
const IDLE_VOLTS = 100;
const IDLE_OHMS = 1e6;
const IDLE_FARADS = 10e-12;
/** Resistance of a current source, ohms: a volt across it is a picoampere. */
const SOURCE_OHMS = 1e12;

interface DiodeStage {
  readonly anode: number;
  readonly idle: number;
  readonly chassis: number;
  readonly side: OutputSide;
}

/** The diode's values; those of another detector are a fault of the caller. */
export function diodeParts(circuit: DetectorCircuit): DiodeParts {
  const { diode } = circuit.detector;
  if (!diode) throw new Error(`a ${circuit.detector.kind} detector without a diode`);
  return diode;
}

/**
 * Stamps a diode or crystal detector. The network's reference is the diode's far end, the top of its load, so that the
 * diode is the port between anode and reference; the chassis is a node of its own.
 */
function stampStage(network: Network, circuit: DetectorCircuit, ideal: IdealParts): DiodeStage {
  const diode = diodeParts(circuit);
  const chassis = network.node();
  const anode = network.node();
  const idle = network.node();
  network.resistor(idle, network.fixed(IDLE_VOLTS), IDLE_OHMS);
  network.capacitor(idle, CATHODE, IDLE_FARADS);
  network.capacitor(anode, CATHODE, diode.capacitanceFarads);
  // the steady reverse current, which the law leaves out, as a source behind a resistance that nothing notices
  if (diode.law.kind === 'exponential') {
    network.resistor(anode, network.fixed(diode.law.saturationAmps * SOURCE_OHMS), SOURCE_OHMS);
  }
  if (diode.loadOhms !== null) network.resistor(CATHODE, chassis, diode.loadOhms);
  network.capacitor(CATHODE, chassis, ideal.plateBypass ? 0 : diode.bypassFarads);
  let from = CATHODE;
  if (diode.filterOhms !== null) {
    from = network.node();
    network.resistor(CATHODE, from, diode.filterOhms);
    network.capacitor(from, chassis, ideal.plateBypass ? 0 : diode.filterFarads);
  }
  const side = stampOutput(network, from, circuit.output, ideal.load === true, chassis);
  return { anode, idle, chassis, side };
}

/** The audio network: the coil is a short, so the anode is at the chassis. */
export function diodeAudio(circuit: DetectorCircuit, ideal: IdealParts = {}): AudioStage {
  const network = new Network();
  const { anode, idle, chassis, side } = stampStage(network, circuit, ideal);
  network.resistor(anode, chassis, WINDING_OHMS);
  const probe = probeOf(network, side.heard);
  return {
    system: network.assemble(),
    gridNode: anode,
    plateNode: idle,
    output: { index: probe.index, weight: probe.weight * diodeParts(circuit).volume },
    points: { chassisNode: chassis, feedNode: null, loadNode: idle, coupledNode: side.coupledNode },
  };
}

/** What the stage's linear part does at the station's carrier. */
export function diodeCarrier(circuit: DetectorCircuit): CarrierPorts {
  const network = new Network();
  const { anode, idle, chassis } = stampStage(network, circuit, {});
  const source = network.source(anode, chassis);
  return portsAt(network, source, anode, idle, circuit.station.carrierHertz);
}
