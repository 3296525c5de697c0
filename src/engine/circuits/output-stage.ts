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

/** Stands for an open end behind a coupling capacitor, ohms. */
const OPEN_OHMS = 1e12;

/**
 * Stamps the coupling capacitor and what it feeds, from the live end of the load.
 *
 * @param ground   where the far end of what it feeds is, when that is not the cathode
 * @param perfect  for the cost by part: the coupling a short for audio and nothing behind it that depends on frequency
 */
export function stampOutput(
  network: Network,
  from: number,
  output: Output,
  perfect: boolean,
  ground = CATHODE,
): OutputSide {
  let end = from;
  let coupledNode: number | null = null;
  if (output.couplingFarads !== null && !perfect) {
    end = network.node();
    coupledNode = end;
    network.capacitor(from, end, output.couplingFarads);
    if (output.couplingLeakOhms) network.resistor(from, end, output.couplingLeakOhms);
  }
  if (output.matching) end = stampTransformer(network, end, ground, output.matching, perfect, ground);
  // an open end still hangs somewhere: a bench is a million megohms
  if (output.loadOhms === null && !output.phones && output.couplingFarads !== null)
    network.resistor(end, ground, OPEN_OHMS);
  if (output.loadOhms !== null) network.resistor(end, ground, output.loadOhms);
  if (!perfect) network.capacitor(end, ground, output.loadFarads);
  const heard: Heard = output.phones
    ? stampPhones(network, end, ground, output.phones, perfect)
    : { kind: 'node', node: ground === CATHODE ? end : against(network, end, ground) };
  return { heard, coupledNode };
}

/** A node that carries the voltage between two others, by an ideal 1:1 transformer that nothing loads. */
export function against(network: Network, a: number, b: number): number {
  const read = network.node();
  network.transformer(a, b, read, CATHODE, 1);
  return read;
}
