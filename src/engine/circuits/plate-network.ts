import type { DetectorCircuit } from './circuit.ts';
import { type Complex, complex, over } from './complex.ts';
import { solveComplex } from './dense-solve.ts';
import { type Probe, stampOutput, stampResistorLoad } from './load-resistor.ts';
import { CATHODE, type LinearSystem, Network } from './network.ts';

/** Which parts are taken as ideal for audio, for the cost by part. */
export interface IdealParts {
  readonly gridCapacitor?: boolean;
  readonly plateBypass?: boolean;
  readonly load?: boolean;
}

/** Stamps everything that hangs on the plate but the tube: load, bypass, plate-cathode capacitance, output. */
export function stampPlateSide(
  network: Network,
  plate: number,
  circuit: DetectorCircuit,
  ideal: IdealParts = {},
): Probe {
  const { load, supplyVolts, bypassFarads } = circuit.plate;
  const bypass = ideal.plateBypass ? 0 : bypassFarads;
  network.capacitor(plate, CATHODE, bypass + circuit.tube.plateCathodeFarads);
  switch (load.kind) {
    case 'resistor':
      stampResistorLoad(network, plate, load, supplyVolts);
      return stampOutput(network, plate, circuit.output, ideal.load === true);
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
