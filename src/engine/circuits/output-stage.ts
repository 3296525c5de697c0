import type { Output } from './circuit.ts';
import { stampPhones } from './load-phones.ts';
import { stampTransformer } from './load-transformer.ts';
import { CATHODE, type Network } from './network.ts';

/** What is heard: a node's voltage, or the current of a branch times the impedance it stands for. */
export type Heard =
  | { readonly kind: 'node'; readonly node: number }
  | { readonly kind: 'branch'; readonly branch: number; readonly ohms: number };

/** What is heard, and the output side of the coupling capacitor; null where there is none. */
export interface OutputSide {
  readonly heard: Heard;
  readonly coupledNode: number | null;
}

/**
 * Stamps the coupling capacitor and what it feeds, from the live end of the load.
 *
 * @param perfect  for the cost by part: the coupling a short for audio and nothing behind it that depends on frequency
 */
export function stampOutput(network: Network, from: number, output: Output, perfect: boolean): OutputSide {
  let end = from;
  let coupledNode: number | null = null;
  if (output.couplingFarads !== null && !perfect) {
    end = network.node();
    coupledNode = end;
    network.capacitor(from, end, output.couplingFarads);
    if (output.couplingLeakOhms) network.resistor(from, end, output.couplingLeakOhms);
  }
  if (output.matching) end = stampTransformer(network, end, CATHODE, output.matching, perfect);
  if (output.loadOhms !== null) network.resistor(end, CATHODE, output.loadOhms);
  if (!perfect) network.capacitor(end, CATHODE, output.loadFarads);
  const heard: Heard = output.phones
    ? stampPhones(network, end, CATHODE, output.phones, perfect)
    : { kind: 'node', node: end };
  return { heard, coupledNode };
}
