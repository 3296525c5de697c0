import type { DetectorCircuit, Output } from '../circuits/circuit.ts';
import { type DetectorNetwork, gridLeakNetwork, wireSource } from './grid-leak-network.ts';
import { createNetwork } from './linear-network.ts';
import { type Listening, wireOutput, wirePlate } from './plate-wiring.ts';
import type { ReferenceSource } from './source-drive.ts';

/** Wires any detector for the reference; the tuned circuit's far end and the chassis are at its zero volts. */
export function detectorNetwork(
  circuit: DetectorCircuit,
  source: ReferenceSource,
  carrierHertz: number,
  stepSeconds: number,
): DetectorNetwork {
  switch (circuit.detector.kind) {
    case 'grid leak':
      return gridLeakNetwork(circuit, source, carrierHertz, stepSeconds);
    case 'plate bend':
    case 'infinite impedance':
      return cathodeNetwork(circuit, source, carrierHertz, stepSeconds);
    case 'diode':
    case 'crystal':
      return diodeNetwork(circuit, source, carrierHertz, stepSeconds);
  }
}

function cathodeNetwork(
  circuit: DetectorCircuit,
  source: ReferenceSource,
  carrierHertz: number,
  stepSeconds: number,
): DetectorNetwork {
  const network = createNetwork();
  const { cathode: chassis } = network;
  const { tube, plate: plateParts, detector } = circuit;
  const parts = detector.cathode ?? { ohms: null, farads: 0, biasVolts: 0 };
  const { tap, foot } = wireSource(network, circuit, source, carrierHertz, stepSeconds, parts.biasVolts);
  const cathode = parts.ohms === null ? chassis : network.free();
  if (parts.ohms !== null) {
    network.resistor(cathode, chassis, parts.ohms);
    network.capacitor(cathode, chassis, parts.farads);
  }
  // a milliohm between tap and grid, so that the grid is a node of its own
  const grid = network.free();
  network.resistor(tap, grid, 1);
  const plate = network.free();
  network.capacitor(grid, cathode, tube.gridCathodeFarads);
  network.capacitor(grid, plate, tube.gridPlateFarads);
  network.capacitor(plate, cathode, tube.plateCathodeFarads);
  let heard: Listening;
  if (detector.kind === 'infinite impedance') {
    network.resistor(plate, network.held(plateParts.supplyVolts), plateParts.dropping?.ohms ?? 100);
    network.capacitor(plate, chassis, plateParts.dropping?.farads ?? plateParts.bypassFarads);
    heard = wireOutput(network, cathode, circuit.output);
  } else {
    heard = wirePlate(network, plate, { ...circuit, tube: { ...tube, plateCathodeFarads: 0 } });
  }
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

function diodeNetwork(
  circuit: DetectorCircuit,
  source: ReferenceSource,
  carrierHertz: number,
  stepSeconds: number,
): DetectorNetwork {
  const { diode } = circuit.detector;
  if (!diode) throw new RangeError('a diode detector needs a diode');
  const network = createNetwork();
  const { cathode: chassis } = network;
  const { tap, foot } = wireSource(network, circuit, source, carrierHertz, stepSeconds, 0);
  const top = network.free();
  const anode = network.free();
  const series = diode.law.kind === 'exponential' ? diode.law.seriesOhms : 0;
  network.resistor(tap, anode, Math.max(series, 0.01));
  network.capacitor(tap, top, diode.capacitanceFarads);
  network.resistor(top, chassis, diode.loadOhms ?? Number.POSITIVE_INFINITY);
  network.capacitor(top, chassis, diode.bypassFarads);
  let from = top;
  if (diode.filterOhms !== null) {
    from = network.free();
    network.resistor(top, from, diode.filterOhms);
    network.capacitor(from, chassis, diode.filterFarads);
  }
  const heard = wireOutput(network, from, withOpenEnd(circuit.output));
  const idle = network.free();
  network.resistor(idle, chassis, 1e6);
  network.capacitor(idle, chassis, 10e-12);
  return {
    network,
    ports: [
      { a: anode, b: top },
      { a: idle, b: chassis },
    ],
    tap,
    foot,
    grid: anode,
    plate: idle,
    heard: { ...heard, gain: heard.gain * diode.volume },
  };
}

/** An open end behind a coupling capacitor still needs somewhere to hang. */
function withOpenEnd(output: Output): Output {
  const hangs = output.couplingFarads === null || output.loadOhms !== null || output.phones;
  return hangs ? output : { ...output, loadOhms: 1e12 };
}
