import type { RestPoint } from './rest-point.ts';

/** What flows from the supply at rest, and what the parts on its way turn into heat. */
export interface DirectCurrents {
  readonly supplyAmps: number;
  /** W, in the load: a resistor, the resistance of a winding, or the cathode resistor of an infinite impedance. */
  readonly loadWatts: number;
  /** W, in the dropping resistor; 0 without one. */
  readonly droppingWatts: number;
  /** W, in the cathode resistor; 0 without one. */
  readonly cathodeWatts: number;
  /** Direct volts on the output side of the coupling capacitor, against the chassis; 0 without one. */
  readonly coupledVolts: number;
}

/** Kirchhoff's current law at the plate: tube, leaking bypass and leaking coupling capacitor draw from the load. */
export function directCurrents(rest: RestPoint): DirectCurrents {
  const { circuit, audio, currents, unknowns } = rest;
  const { plate, output, detector } = circuit;
  const { chassisNode, feedNode, loadNode, coupledNode } = audio.points;
  const chassisVolts = chassisNode === null ? 0 : (unknowns[chassisNode] as number);
  const at = (node: number): number => (unknowns[node] as number) - chassisVolts;
  const coupledVolts = coupledNode === null ? 0 : at(coupledNode);
  const cathodeOhms = detector.cathode?.ohms ?? null;
  const cathodeWatts = cathodeOhms === null ? 0 : chassisVolts ** 2 / cathodeOhms;
  if (detector.diode) return { supplyAmps: 0, loadWatts: 0, droppingWatts: 0, cathodeWatts: 0, coupledVolts };
  const plateVolts = at(audio.plateNode);
  if (detector.kind === 'infinite impedance') {
    // its load is in the cathode lead, and what follows hangs there
    const supplyAmps = currents.plateAmps;
    const droppingWatts = plate.dropping ? (plate.supplyVolts - plateVolts) * supplyAmps : 0;
    return { supplyAmps, loadWatts: cathodeWatts, droppingWatts, cathodeWatts, coupledVolts };
  }
  const throughBypass = plate.bypassLeakOhms ? plateVolts / plate.bypassLeakOhms : 0;
  const throughCoupling = output.couplingLeakOhms ? (at(loadNode) - coupledVolts) / output.couplingLeakOhms : 0;
  const supplyAmps = currents.plateAmps + throughBypass + throughCoupling;
  const feedVolts = feedNode === null ? plate.supplyVolts : at(feedNode);
  return {
    supplyAmps,
    loadWatts: (feedVolts - at(loadNode)) * supplyAmps,
    droppingWatts: (plate.supplyVolts - feedVolts) * supplyAmps,
    cathodeWatts,
    coupledVolts,
  };
}
