import type {
  DetectorCircuit,
  GridLeakDetector,
  Output,
  Plate,
  Station,
  TunedCircuit,
} from '../../src/engine/circuits/circuit.ts';
import type { ReferenceSource } from '../../src/engine/reference/source-drive.ts';
import { gridLawFromZeroCurrent } from '../../src/engine/tubes/grid-law.ts';
import type { Tube } from '../../src/engine/tubes/tube.ts';

export interface StageChanges {
  readonly station?: Partial<Station>;
  readonly tunedCircuit?: TunedCircuit;
  readonly detector?: Partial<GridLeakDetector>;
  readonly tube?: Partial<Tube>;
  readonly plate?: Partial<Plate>;
  readonly output?: Partial<Output>;
}

/** A medium-mu triode with round numbers of our own, in a grid-leak stage of usual values. */
export function stageOf(changes: StageChanges = {}): DetectorCircuit {
  const law = { G: 8e-4, C: 3.5, gamma: 1.5, mu: 20, phi: 0.6, ...gridLawFromZeroCurrent(10e-6, 0.0905) };
  return {
    station: { carrierHertz: 1e6, levelVoltsRms: 0.2, modulation: 0.8, ...changes.station },
    tunedCircuit: changes.tunedCircuit ?? { kind: 'stiff', loadedQ: 50, detuneHertz: 0 },
    detector: {
      kind: 'grid leak',
      law: 'tube',
      gridCapacitorFarads: 100e-12,
      leakOhms: 1e6,
      leakPosition: 'to cathode',
      leakReturnVolts: 0,
      capacitorLeakageOhms: null,
      chargeOhms: null,
      ...changes.detector,
    },
    tube: {
      type: 'medium mu',
      law,
      gridPlateFarads: 5e-12,
      gridCathodeFarads: 4e-12,
      plateCathodeFarads: 4e-12,
      ...changes.tube,
    },
    plate: { supplyVolts: 90, bypassFarads: 100e-12, load: { kind: 'resistor', ohms: 47e3 }, ...changes.plate },
    output: { couplingFarads: 1e-9, loadOhms: 470e3, loadFarads: 20e-12, ...changes.output },
  };
}

/** The circuit's own stiff source as the reference wants it stated; `loadedQ` 0 leaves the tuned circuit out. */
export function stiffSource(circuit: DetectorCircuit, loadedQ = 0, detuneHertz = 0): ReferenceSource {
  return { kind: 'stiff', loadedQ, detuneHertz, levelVoltsRms: circuit.station.levelVoltsRms };
}
