import type { FallingInductance, PlateLoad, Transformer } from './circuit.ts';
import type { Network } from './network.ts';

/**
 * Stamps a transformer with its primary from `low` (the supply) to `high` (the plate): DC resistance and leakage to the
 * inner point, primary inductance and core loss from there to `low`, winding capacitance across the primary, the ideal
 * 1:n, secondary resistance, secondary capacitance. The secondary's far end is at `ground`. Its polarity
 * turns the output's sign, which nobody hears; positive plate volts give positive output here.
 *
 * @param perfect  for the cost by part: endless inductance, no leakage, no winding capacitance
 * @returns        node of the secondary's live end, with its capacitance on it
 */
export function stampTransformer(
  network: Network,
  high: number,
  low: number,
  parts: Transformer,
  perfect: boolean,
  ground = -1,
): number {
  const inner = network.node();
  const secondary = network.node();
  network.inductor(high, inner, perfect ? 0 : parts.leakageHenries, parts.primaryDcOhms);
  if (parts.coreLossOhms !== null) network.resistor(inner, low, parts.coreLossOhms);
  if (!perfect) {
    network.inductor(inner, low, parts.primaryHenries);
    network.capacitor(high, low, parts.primaryFarads);
  }
  network.transformer(inner, low, secondary, ground, parts.ratio);
  const out = network.node();
  network.inductor(secondary, out, 0, parts.secondaryDcOhms);
  network.capacitor(out, ground, perfect ? 0 : parts.secondaryFarads);
  return out;
}

/**
 * Inductance of a winding that carries direct current, H: L0/(1 + k·I), k from the pair of readings. The hyperbola
 * through two readings is a common-practice curve without a source; between the readings it is good to a tenth or so.
 */
export function inductanceAt(falling: FallingInductance, amps: number): number {
  const { henriesWithoutCurrent, henriesAtAmps } = falling;
  const perAmp = (henriesWithoutCurrent / henriesAtAmps - 1) / falling.amps;
  return henriesWithoutCurrent / (1 + perAmp * Math.max(amps, 0));
}

/** The load with its inductance at a direct current; other loads as they are. */
export function loadAtCurrent(load: PlateLoad, amps: number): PlateLoad {
  if (load.kind !== 'transformer' || load.falling === null) return load;
  return { ...load, primaryHenries: inductanceAt(load.falling, amps) };
}
