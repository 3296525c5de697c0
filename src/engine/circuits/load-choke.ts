import type { ChokeLoad } from './circuit.ts';
import type { Network } from './network.ts';

/**
 * Stamps a choke from the supply to the plate: inductance with its DC resistance, core loss and self-capacitance across
 * the whole.
 *
 * @param perfect  for the cost by part: endless inductance and no self-capacitance; core loss is no matter of frequency
 */
export function stampChokeLoad(
  network: Network,
  plate: number,
  supply: number,
  choke: ChokeLoad,
  perfect: boolean,
): void {
  if (choke.coreLossOhms !== null) network.resistor(plate, supply, choke.coreLossOhms);
  if (perfect) return;
  network.inductor(plate, supply, choke.henries, choke.dcOhms);
  network.capacitor(plate, supply, choke.selfFarads ?? 0);
}
