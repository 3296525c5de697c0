import type { DetectorCircuit, Output, Phones, Transformer } from '../circuits/circuit.ts';
import type { LinearNetwork } from './linear-network.ts';

/** What is heard: volts of `a` against `b`, times `gain`. */
export interface Listening {
  readonly a: number;
  readonly b: number;
  readonly gain: number;
}

/** Wires all that hangs on the plate but the tube, for the reference alone; returns where its output is read. */
export function wirePlate(network: LinearNetwork, plate: number, circuit: DetectorCircuit): Listening {
  const { cathode } = network;
  const { load, supplyVolts, bypassFarads, carrierChoke, dropping } = circuit.plate;
  network.capacitor(plate, cathode, circuit.tube.plateCathodeFarads + bypassFarads);
  network.resistor(plate, cathode, circuit.plate.bypassLeakOhms ?? Number.POSITIVE_INFINITY);
  let feed = network.held(supplyVolts);
  if (dropping) {
    const held = feed;
    feed = network.free();
    network.resistor(held, feed, dropping.ohms);
    network.capacitor(feed, cathode, dropping.farads);
  }
  let live = plate;
  if (carrierChoke) {
    live = network.free();
    wireCoil(network, plate, live, carrierChoke.henries, carrierChoke.dcOhms);
    network.capacitor(plate, live, carrierChoke.selfFarads ?? 0);
    network.capacitor(live, cathode, carrierChoke.bypassFarads);
  }
  if (load.kind === 'phones') return wirePhones(network, live, feed, load);
  if (load.kind === 'transformer')
    return wireOutput(network, wireTransformer(network, live, feed, load), circuit.output);
  if (load.kind === 'resistor') network.resistor(feed, live, load.ohms);
  else {
    wireCoil(network, feed, live, load.henries, load.dcOhms);
    network.resistor(feed, live, load.coreLossOhms ?? Number.POSITIVE_INFINITY);
    network.capacitor(feed, live, load.selfFarads ?? 0);
  }
  return wireOutput(network, live, circuit.output);
}

export function wireOutput(network: LinearNetwork, live: number, output: Output): Listening {
  const { cathode } = network;
  let end = live;
  if (output.couplingFarads !== null) {
    end = network.free();
    network.capacitor(live, end, output.couplingFarads);
    network.resistor(live, end, output.couplingLeakOhms ?? Number.POSITIVE_INFINITY);
  }
  if (output.matching) end = wireTransformer(network, end, cathode, output.matching);
  network.resistor(end, cathode, output.loadOhms ?? Number.POSITIVE_INFINITY);
  network.capacitor(end, cathode, output.loadFarads);
  return output.phones ? wirePhones(network, end, cathode, output.phones) : { a: end, b: cathode, gain: 1 };
}

/** L in series with R, between two nodes. */
function wireCoil(network: LinearNetwork, a: number, b: number, henries: number, ohms: number): void {
  if (ohms === 0) {
    network.inductor(a, b, henries);
    return;
  }
  const middle = network.free();
  network.inductor(a, middle, henries);
  network.resistor(middle, b, ohms);
}

/** Primary from `low` to `high`; returns the secondary's live end. */
function wireTransformer(network: LinearNetwork, high: number, low: number, t: Transformer): number {
  const { cathode } = network;
  const inner = network.free();
  network.capacitor(high, low, t.primaryFarads);
  if (t.leakageHenries > 0) wireCoil(network, high, inner, t.leakageHenries, t.primaryDcOhms);
  else network.resistor(high, inner, Math.max(t.primaryDcOhms, 1e-3));
  network.inductor(inner, low, t.primaryHenries);
  network.resistor(inner, low, t.coreLossOhms ?? Number.POSITIVE_INFINITY);
  const winding = network.free();
  network.transformer(inner, low, winding, cathode, t.ratio);
  const out = network.free();
  network.resistor(winding, out, Math.max(t.secondaryDcOhms, 1e-3));
  network.capacitor(out, cathode, t.secondaryFarads);
  return out;
}

/** The coil's current shows as the drop on its DC resistance; `gain` makes it the volts of the impedance at 400 Hz. */
function wirePhones(network: LinearNetwork, high: number, low: number, p: Phones): Listening {
  const ohms = Math.max(p.dcOhms, 1e-3);
  const foot = network.free();
  network.capacitor(high, low, p.selfFarads ?? 0);
  let top = high;
  const { resonanceOhms, resonanceHenries, resonanceFarads } = p;
  if (resonanceOhms !== null && resonanceHenries !== null && resonanceFarads !== null) {
    top = network.free();
    network.resistor(high, top, resonanceOhms);
    network.inductor(high, top, resonanceHenries);
    network.capacitor(high, top, resonanceFarads);
  }
  network.inductor(top, foot, p.henries);
  network.resistor(top, foot, p.eddyLossOhms ?? Number.POSITIVE_INFINITY);
  network.resistor(foot, low, ohms);
  return { a: foot, b: low, gain: magnitudeAt400(p) / ohms };
}

/** |Z| at 400 Hz by admittances and impedances in turn: its own arithmetic, so that a slip elsewhere would show. */
function magnitudeAt400(p: Phones): number {
  const w = 800 * Math.PI;
  // a conductance g beside a susceptance b, in series with what is there
  const add = (z: [number, number], g: number, b: number): [number, number] => {
    const d = g * g + b * b;
    return [z[0] + g / d, z[1] - b / d];
  };
  let z: [number, number] = [p.dcOhms, 0];
  z = add(z, p.eddyLossOhms === null ? 0 : 1 / p.eddyLossOhms, -1 / (w * p.henries));
  if (p.resonanceOhms !== null && p.resonanceHenries !== null && p.resonanceFarads !== null) {
    z = add(z, 1 / p.resonanceOhms, w * p.resonanceFarads - 1 / (w * p.resonanceHenries));
  }
  const d = z[0] * z[0] + z[1] * z[1];
  return 1 / Math.hypot(z[0] / d, -z[1] / d + w * (p.selfFarads ?? 0));
}
