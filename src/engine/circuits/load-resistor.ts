import type { Output, ResistorLoad } from './circuit.ts';
import { CATHODE, type Network } from './network.ts';

/** What is heard, as weights on the network's unknowns: output volts = Σ weight · z. */
export interface Probe {
  readonly index: number;
  readonly weight: number;
}

/** Stamps a plate resistor from the supply to the plate. */
export function stampResistorLoad(network: Network, plate: number, load: ResistorLoad, supplyVolts: number): void {
  network.resistorTo(plate, supplyVolts, load.ohms);
}

/**
 * Stamps the coupling capacitor and what it feeds; returns where the output is read.
 *
 * @param ideal  the coupling as a short for audio and no capacitance behind it: what the load would do were it perfect
 */
export function stampOutput(network: Network, plate: number, output: Output, ideal: boolean): Probe {
  if (ideal) {
    network.resistor(plate, CATHODE, output.loadOhms);
    return { index: plate, weight: 1 };
  }
  const out = network.node();
  network.capacitor(plate, out, output.couplingFarads);
  network.resistor(out, CATHODE, output.loadOhms);
  if (output.loadFarads > 0) network.capacitor(out, CATHODE, output.loadFarads);
  return { index: out, weight: 1 };
}
