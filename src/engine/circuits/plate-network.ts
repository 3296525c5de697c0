import type { DetectorCircuit } from './circuit.ts';
import { type Complex, complex, over } from './complex.ts';
import { solveComplex } from './dense-solve.ts';
import { stampChokeLoad } from './load-choke.ts';
import { stampPhones } from './load-phones.ts';
import { stampTransformer } from './load-transformer.ts';
import { CATHODE, type LinearSystem, Network } from './network.ts';
import { type Heard, type OutputSide, stampOutput } from './output-stage.ts';

/** Which parts are taken as ideal for audio, for the cost by part. */
export interface IdealParts {
  readonly gridCapacitor?: boolean;
  /** The bypass, and the one behind a carrier choke. */
  readonly plateBypass?: boolean;
  /** The load with what it feeds, and the supply behind it. */
  readonly load?: boolean;
}

/** What is heard, as a weight on one of the network's unknowns: output volts = weight · z[index]. */
export interface Probe {
  readonly index: number;
  readonly weight: number;
}

/** Points besides the tube's electrodes that a meter is put to. */
export interface MeterPoints {
  /** What voltages are read against; null: the network's reference itself, a cathode at chassis level. */
  readonly chassisNode: number | null;
  /** Where the load is fed behind a dropping resistor; null: at the supply itself. */
  readonly feedNode: number | null;
  /** The load's end at the tube: the plate, or behind a carrier choke. */
  readonly loadNode: number;
  /** Output side of the coupling capacitor; null where there is none. */
  readonly coupledNode: number | null;
}

/** What hangs on the plate. */
export interface PlateSide {
  readonly heard: Heard;
  readonly points: MeterPoints;
}

/** Finds what is heard among the unknowns of a network with all its nodes. */
export function probeOf(network: Network, heard: Heard): Probe {
  return heard.kind === 'node'
    ? { index: heard.node, weight: 1 }
    : { index: network.branchIndex(heard.branch), weight: heard.ohms };
}

/** Stamps everything that hangs on the plate but the tube: bypass, plate-cathode capacitance, load, supply, output. */
export function stampPlateSide(
  network: Network,
  plate: number,
  circuit: DetectorCircuit,
  ideal: IdealParts = {},
  ground = CATHODE,
): PlateSide {
  const { supplyVolts, bypassFarads, bypassLeakOhms, carrierChoke, dropping } = circuit.plate;
  const bypass = ideal.plateBypass ? 0 : bypassFarads;
  network.capacitor(plate, CATHODE, circuit.tube.plateCathodeFarads);
  network.capacitor(plate, ground, bypass);
  // a leak moves the rest point, which the cost by part holds: it stays where the bypass is taken as ideal
  if (bypassLeakOhms) network.resistor(plate, ground, bypassLeakOhms);
  let top = plate;
  if (carrierChoke) {
    top = network.node();
    network.inductor(plate, top, carrierChoke.henries, carrierChoke.dcOhms);
    network.capacitor(plate, top, carrierChoke.selfFarads ?? 0);
    network.capacitor(top, ground, ideal.plateBypass ? 0 : carrierChoke.bypassFarads);
  }
  let supply = network.fixed(supplyVolts, ground);
  let feedNode: number | null = null;
  if (dropping && !ideal.load) {
    feedNode = network.node();
    network.resistor(feedNode, supply, dropping.ohms);
    network.capacitor(feedNode, ground, dropping.farads);
    supply = feedNode;
  }
  const { heard, coupledNode } = stampLoad(network, top, supply, circuit, ideal.load === true, ground);
  const chassisNode = ground === CATHODE ? null : ground;
  return { heard, points: { chassisNode, feedNode, loadNode: top, coupledNode } };
}

/** The load between two points, and what it feeds. */
function stampLoad(
  network: Network,
  top: number,
  supply: number,
  circuit: DetectorCircuit,
  perfect: boolean,
  ground: number,
): OutputSide {
  const { load } = circuit.plate;
  switch (load.kind) {
    case 'resistor':
      network.resistor(top, supply, load.ohms);
      return stampOutput(network, top, circuit.output, perfect, ground);
    case 'choke':
      stampChokeLoad(network, top, supply, load, perfect);
      return stampOutput(network, top, circuit.output, perfect, ground);
    case 'transformer': {
      const secondary = stampTransformer(network, top, supply, load, perfect, ground);
      return stampOutput(network, secondary, circuit.output, perfect, ground);
    }
    case 'phones':
      return { heard: stampPhones(network, top, supply, load, perfect), coupledNode: null };
  }
}

/**
 * Admittance of the plate side at one frequency (load, bypass and plate-cathode capacitance; without the tube's
 * plate resistance and the grid-plate capacitance), S.
 */
export function plateAdmittance(circuit: DetectorCircuit, hertz: number): Complex {
  const network = new Network();
  const plate = network.node();
  stampPlateSide(network, plate, circuit);
  return over(complex(1), impedanceAt(network.assemble(), plate, hertz));
}

/** Impedance from one node to the cathode at one frequency, ohms. Sources are dead. */
export function impedanceAt(system: LinearSystem, node: number, hertz: number): Complex {
  const n = system.size;
  const x = new Float64Array(2 * n);
  x[node] = 1;
  const im = system.storage.map((c) => c * 2 * Math.PI * hertz);
  solveComplex(system.conductance, im, n, x);
  return complex(x[node] as number, x[n + node] as number);
}
