import type { CarrierPorts } from './carrier-path.ts';
import { cathodeStageAudio, cathodeStageCarrier } from './cathode-stage.ts';
import type { DetectorCircuit } from './circuit.ts';
import { diodeAudio, diodeCarrier } from './diode-stage.ts';
import { type AudioStage, gridLeakAudio, gridLeakCarrier, leakOhmsAtAudio } from './grid-leak.ts';
import type { IdealParts } from './plate-network.ts';

/** The audio network of any detector, with the two ports where its tube or diode draws current. */
export function detectorAudio(circuit: DetectorCircuit, ideal: IdealParts = {}): AudioStage {
  switch (circuit.detector.kind) {
    case 'grid leak':
      return gridLeakAudio(circuit, ideal);
    case 'plate bend':
    case 'infinite impedance':
      return cathodeStageAudio(circuit, ideal);
    case 'diode':
    case 'crystal':
      return diodeAudio(circuit, ideal);
  }
}

/** What the linear part of any detector does at the station's carrier. */
export function detectorCarrier(circuit: DetectorCircuit): CarrierPorts {
  switch (circuit.detector.kind) {
    case 'grid leak':
      return gridLeakCarrier(circuit);
    case 'plate bend':
    case 'infinite impedance':
      return cathodeStageCarrier(circuit);
    case 'diode':
    case 'crystal':
      return diodeCarrier(circuit);
  }
}

/** Resistance and capacitance that the detector charges: the pair whose product must outlast the carrier's cycle. */
export interface ChargedPair {
  readonly ohms: number;
  readonly farads: number;
  /** Least product with the carrier at which averaging holds; null where nothing is charged. */
  readonly leastCycles: number | null;
}

/** The pair of a detector. Bounds: 20 cycles for grid leak and infinite impedance, 50 for a diode. */
export function chargedPair(circuit: DetectorCircuit): ChargedPair {
  const { detector, output } = circuit;
  switch (detector.kind) {
    case 'grid leak':
      return { ohms: leakOhmsAtAudio(circuit), farads: detector.gridCapacitorFarads, leastCycles: 20 };
    case 'infinite impedance':
      return { ohms: detector.cathode?.ohms ?? 0, farads: detector.cathode?.farads ?? 0, leastCycles: 20 };
    case 'plate bend':
      return { ohms: detector.cathode?.ohms ?? 0, farads: detector.cathode?.farads ?? 0, leastCycles: null };
    case 'diode':
    case 'crystal': {
      const load = detector.diode?.loadOhms ?? output.phones?.dcOhms ?? output.loadOhms ?? 0;
      return {
        ohms: load,
        farads: detector.diode?.bypassFarads ?? 0,
        leastCycles: detector.kind === 'diode' ? 50 : null,
      };
    }
  }
}
