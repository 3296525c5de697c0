import type { RestPoint } from './rest-point.ts';

/** What flows from the supply at rest, and what the parts on its way turn into heat. */
export interface DirectCurrents {
  readonly supplyAmps: number;
  /** Through the load; more than the plate draws where a capacitor behind it leaks. */
  readonly loadAmps: number;
  /** W, in the load: a resistor, or the resistance of a winding. */
  readonly loadWatts: number;
  /** W, in the dropping resistor; 0 without one. */
  readonly droppingWatts: number;
  /** Direct volts on the output side of the coupling capacitor; 0 without one. */
  readonly coupledVolts: number;
}

/** Kirchhoff's current law at the plate: tube, leaking bypass and leaking coupling capacitor draw from the load. */
export function directCurrents(rest: RestPoint): DirectCurrents {
  const { circuit, audio, currents, unknowns } = rest;
  const { plate, output } = circuit;
  const { feedNode, loadNode, coupledNode } = audio.points;
  const at = (node: number): number => unknowns[node] as number;
  const coupledVolts = coupledNode === null ? 0 : at(coupledNode);
  const throughBypass = plate.bypassLeakOhms ? at(audio.plateNode) / plate.bypassLeakOhms : 0;
  const throughCoupling = output.couplingLeakOhms ? (at(loadNode) - coupledVolts) / output.couplingLeakOhms : 0;
  const amps = currents.plateAmps + throughBypass + throughCoupling;
  const feedVolts = feedNode === null ? plate.supplyVolts : at(feedNode);
  return {
    supplyAmps: amps,
    loadAmps: amps,
    loadWatts: (feedVolts - at(loadNode)) * amps,
    droppingWatts: (plate.supplyVolts - feedVolts) * amps,
    coupledVolts,
  };
}
