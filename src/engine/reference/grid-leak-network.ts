import type { DetectorCircuit } from '../circuits/circuit.ts';
import { createNetwork, type LinearNetwork, type Port } from './linear-network.ts';
import { type Listening, wirePlate } from './plate-wiring.ts';
import type { ReferenceSource } from './source-drive.ts';

/** The grid-leak detector as elements, with the nodes the results are read from. */
export interface DetectorNetwork {
  readonly network: LinearNetwork;
  readonly ports: readonly [Port, Port];
  /** Where the detector is connected to the tuned circuit, against `foot`. */
  readonly tap: number;
  readonly foot: number;
  readonly grid: number;
  readonly plate: number;
  readonly heard: Listening;
}

/**
 * Wires a grid-leak detector.
 *
 * `carrierHertz` and `stepSeconds` serve the tank alone: its L and C are scaled by (ωh/2)/tan(ωh/2), so that the
 * trapezoidal rule gives each its true reactance at the carrier.
 */
export function gridLeakNetwork(
  circuit: DetectorCircuit,
  source: ReferenceSource,
  carrierHertz: number,
  stepSeconds: number,
): DetectorNetwork {
  const { detector, tube } = circuit;
  const network = createNetwork();
  const { cathode } = network;
  const across = detector.leakPosition === 'across capacitor';
  const footVolts = across ? detector.leakReturnVolts : 0;
  const { tap, foot } = wireSource(network, circuit, source, carrierHertz, stepSeconds, footVolts);
  const grid = network.free();
  const plate = network.free();
  network.capacitor(tap, grid, detector.gridCapacitorFarads);
  if (detector.capacitorLeakageOhms !== null) network.resistor(tap, grid, detector.capacitorLeakageOhms);
  if (across) network.resistor(tap, grid, detector.leakOhms);
  else network.resistor(grid, network.held(detector.leakReturnVolts), detector.leakOhms);
  network.capacitor(grid, cathode, tube.gridCathodeFarads);
  network.capacitor(grid, plate, tube.gridPlateFarads);
  const heard = wirePlate(network, plate, circuit);
  return {
    network,
    ports: [
      { a: grid, b: cathode },
      { a: plate, b: cathode },
    ],
    tap,
    foot,
    grid,
    plate,
    heard,
  };
}

/** Wires the source: an ideal voltage at the tap, or the coil with its tuning capacitance, driven by a current. */
export function wireSource(
  network: LinearNetwork,
  circuit: DetectorCircuit,
  source: ReferenceSource,
  carrierHertz: number,
  stepSeconds: number,
  footVolts: number,
): { tap: number; foot: number } {
  const foot = network.held(footVolts);
  let tap: number;
  if (source.kind === 'stiff') tap = network.drive(footVolts);
  else {
    const coil = circuit.tunedCircuit;
    if (coil.kind !== 'coil') throw new RangeError('a coil source needs a coil');
    const omega = 2 * Math.PI * carrierHertz;
    const half = (omega * stepSeconds) / 2;
    const prewarp = half / Math.tan(half);
    const top = network.free();
    network.inductor(top, foot, coil.coilHenries * prewarp);
    network.capacitor(top, foot, source.tankFarads * prewarp);
    network.resistor(top, foot, coil.unloadedQ * omega * coil.coilHenries);
    network.driveCurrent(top);
    tap = top;
    if (coil.tap !== 1) {
      tap = network.free();
      network.transformer(top, foot, tap, foot, coil.tap);
    }
  }
  return { tap, foot };
}
