import type { DetectorCircuit } from './circuit.ts';
import { type Complex, complex, over } from './complex.ts';
import { solveComplex } from './dense-solve.ts';
import { stampChokeLoad } from './load-choke.ts';
import { stampPhones } from './load-phones.ts';
import { stampTransformer } from './load-transformer.ts';
import { CATHODE, type LinearSystem, Network } from './network.ts';
import { type Heard, stampOutput } from './output-stage.ts';

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
): Heard {
  const { load, supplyVolts, bypassFarads, bypassLeakOhms, carrierChoke, dropping } = circuit.plate;
  const bypass = ideal.plateBypass ? 0 : bypassFarads;
  network.capacitor(plate, CATHODE, bypass + circuit.tube.plateCathodeFarads);
  // a leak moves the rest point, which the cost by part holds: it stays where the bypass is taken as ideal
  if (bypassLeakOhms) network.resistor(plate, CATHODE, bypassLeakOhms);
  let top = plate;
  if (carrierChoke) {
    top = network.node();
    network.inductor(plate, top, carrierChoke.henries, carrierChoke.dcOhms);
    network.capacitor(plate, top, carrierChoke.selfFarads ?? 0);
    network.capacitor(top, CATHODE, ideal.plateBypass ? 0 : carrierChoke.bypassFarads);
  }
  let supply = network.fixed(supplyVolts);
  if (dropping && !ideal.load) {
    const feed = network.node();
    network.resistor(feed, supply, dropping.ohms);
    network.capacitor(feed, CATHODE, dropping.farads);
    supply = feed;
  }
  const perfect = ideal.load === true;
  switch (load.kind) {
    case 'resistor':
      network.resistor(top, supply, load.ohms);
      return stampOutput(network, top, circuit.output, perfect);
    case 'choke':
      stampChokeLoad(network, top, supply, load, perfect);
      return stampOutput(network, top, circuit.output, perfect);
    case 'transformer':
      return stampOutput(network, stampTransformer(network, top, supply, load, perfect), circuit.output, perfect);
    case 'phones':
      return stampPhones(network, top, supply, load, perfect);
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
