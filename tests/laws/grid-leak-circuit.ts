import type { DetectorCircuit, GridLeakDetector, TunedCircuit } from '../../src/engine/circuits/circuit.ts';
import { SOCKET_STRAYS, tubeFromCatalogue } from '../../src/engine/tubes/socketed-tube.ts';

/** What the tests vary of a grid-leak detector; everything else is our own ordinary one-tube set. */
export interface GridLeakChoice {
  readonly tube?: string;
  readonly levelVoltsRms?: number;
  readonly carrierHertz?: number;
  readonly modulation?: number;
  readonly tunedCircuit?: TunedCircuit;
  readonly law?: GridLeakDetector['law'];
  readonly gridCapacitorFarads?: number;
  readonly leakOhms?: number;
  readonly leakPosition?: GridLeakDetector['leakPosition'];
  readonly leakReturnVolts?: number;
  readonly capacitorLeakageOhms?: number | null;
  readonly supplyVolts?: number;
  readonly bypassFarads?: number;
  readonly plateOhms?: number;
  readonly couplingFarads?: number;
  readonly loadOhms?: number;
  readonly loadFarads?: number;
}

/** A source whose level and Q do not move with the detector. */
export function stiff(loadedQ: number, detuneHertz = 0): TunedCircuit {
  return { kind: 'stiff', loadedQ, detuneHertz };
}

/** A coil of 180 µH as built, which the detector loads. */
export function coil(unloadedQ: number, tap = 1): TunedCircuit {
  return { kind: 'coil', coilHenries: 180e-6, unloadedQ, tap, retuned: true, detuneHertz: 0 };
}

/** Our own demo circuit: a 6SL7-GT at 90 V with 47 kΩ, 250 pF and 2 MΩ, weak signal, with the stated changes. */
export function gridLeak(choice: GridLeakChoice = {}): DetectorCircuit {
  const supplyVolts = choice.supplyVolts ?? 90;
  return {
    station: {
      carrierHertz: choice.carrierHertz ?? 1e6,
      levelVoltsRms: choice.levelVoltsRms ?? 0.05,
      modulation: choice.modulation ?? 0.8,
    },
    tunedCircuit: choice.tunedCircuit ?? stiff(30),
    detector: {
      kind: 'grid leak',
      law: choice.law ?? 'tube',
      gridCapacitorFarads: choice.gridCapacitorFarads ?? 250e-12,
      leakOhms: choice.leakOhms ?? 2e6,
      leakPosition: choice.leakPosition ?? 'to cathode',
      leakReturnVolts: choice.leakReturnVolts ?? 0,
      capacitorLeakageOhms: choice.capacitorLeakageOhms ?? null,
      chargeOhms: null,
    },
    tube: tubeFromCatalogue(choice.tube ?? '6SL7-GT', { supplyVolts, strays: SOCKET_STRAYS }).tube,
    plate: {
      supplyVolts,
      bypassFarads: choice.bypassFarads ?? 250e-12,
      load: { kind: 'resistor', ohms: choice.plateOhms ?? 47e3 },
    },
    output: {
      couplingFarads: choice.couplingFarads ?? 10e-9,
      loadOhms: choice.loadOhms ?? 470e3,
      loadFarads: choice.loadFarads ?? 0,
    },
  };
}
