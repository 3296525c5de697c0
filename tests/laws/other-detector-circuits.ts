import { expect } from 'vitest';
import type { DetectorCircuit, DetectorKind, DiodeLaw, Phones } from '../../src/engine/circuits/circuit.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { proveTone } from '../../src/engine/proof/tone-proof.ts';
import type { TableStore } from '../../src/engine/renderer/table-store.ts';
import { SOCKET_STRAYS, tubeFromCatalogue } from '../../src/engine/tubes/socketed-tube.ts';
import { coil, gridLeak, stiff } from './grid-leak-circuit.ts';
import { overDecades, seededNumbers } from './seeded-numbers.ts';

/** The detectors besides the grid leak. */
export const OTHER_KINDS = ['plate bend', 'infinite impedance', 'diode', 'crystal'] as const;
export type OtherKind = (typeof OTHER_KINDS)[number];

/** One circuit and the tone that is put through it. */
export interface DetectorCase {
  readonly said: string;
  readonly circuit: DetectorCircuit;
  readonly toneHertz: number;
  readonly depth: number;
}

/** A small vacuum diode, 50 mA at about 14 V, e-fold 95 mV as an oxide cathode has; our own assumption. */
export const VACUUM_DIODE: DiodeLaw = { kind: '3/2', perveance: 1e-3, sharpness: 7 };
/** A germanium crystal of the common sort; our own assumption. */
export const CRYSTAL: DiodeLaw = {
  kind: 'exponential',
  saturationAmps: 1e-6,
  idealityVolts: 0.03,
  seriesOhms: 150,
};
/** Headphones of 2 kΩ, both in series; our own assumption. */
export const PHONES: Phones = {
  dcOhms: 2000,
  henries: 1.5,
  eddyLossOhms: 30e3,
  selfFarads: 200e-12,
  resonanceOhms: null,
  resonanceHenries: null,
  resonanceFarads: null,
};
const INTO_A_GRID = { couplingFarads: 10e-9, loadOhms: 1e6, loadFarads: 30e-12 };

/** Half a volt at 1 MHz into each of the detectors, values that a builder would choose. */
export function plainCircuit(kind: DetectorKind): DetectorCircuit {
  const base = gridLeak({ tube: '76', supplyVolts: 180, levelVoltsRms: 0.5, tunedCircuit: stiff(30) });
  const of = (more: Partial<DetectorCircuit['detector']>): DetectorCircuit['detector'] => {
    return { ...base.detector, kind, ...more };
  };
  const diode = {
    law: VACUUM_DIODE,
    loadOhms: 500e3,
    bypassFarads: 120e-12,
    filterOhms: null,
    filterFarads: 0,
    volume: 1,
    capacitanceFarads: 3e-12,
  };
  const plate = { ...base.plate, load: { kind: 'resistor', ohms: 100e3 } } as const;
  switch (kind) {
    case 'grid leak':
      return base;
    case 'plate bend':
      return { ...base, detector: of({ cathode: { ohms: 20e3, farads: 1e-6, biasVolts: 0 } }), plate };
    case 'infinite impedance':
      return {
        ...base,
        detector: of({ cathode: { ohms: 50e3, farads: 500e-12, biasVolts: 0 } }),
        output: INTO_A_GRID,
      };
    case 'diode':
      return { ...base, detector: of({ diode }), output: INTO_A_GRID };
    case 'crystal':
      return {
        ...base,
        detector: of({
          diode: { ...diode, law: CRYSTAL, loadOhms: null, bypassFarads: 1e-9, capacitanceFarads: 1e-12 },
        }),
        output: { couplingFarads: null, loadOhms: null, loadFarads: 0, phones: PHONES },
      };
  }
}

/** Changes the station of a circuit. */
export function heardAt(circuit: DetectorCircuit, levelVoltsRms: number, carrierHertz = 1e6): DetectorCircuit {
  return { ...circuit, station: { ...circuit.station, levelVoltsRms, carrierHertz } };
}

/** Holds renderer and carrier-cycle reference to the limits that the renderer is built to, which the proof carries. */
export function expectProved(c: DetectorCase, tables: TableStore): void {
  const rest = restPoint(c.circuit);
  const proof = proveTone(rest, tables.lawsFor(rest, c.depth), c.toneHertz, c.depth);
  expect(proof.holds, JSON.stringify(proof)).toBe(true);
}

/**
 * Circuits of one kind anywhere in the range that the averaging is promised for: infinite impedance with f·R·C from 20,
 * the diode from 50; half of them behind a coil, whose tank is then a state of the rendering.
 */
export function seededDetectors(kind: OtherKind, seed: number, count: number): DetectorCase[] {
  const next = seededNumbers(seed);
  // the first numbers of near seeds are alike
  for (let k = 0; k < 8; k++) next();
  const pick = <T>(values: readonly T[]): T => values[Math.floor(next() * values.length)] as T;
  const between = (least: number, most: number): number => overDecades(next(), least, most);
  return Array.from({ length: count }, (_, k) => {
    const toneHertz = pick([100, 400, 1000, 2000, 5000, 8000]);
    const depth = pick([0.3, 0.8, 1]);
    const carrierHertz = Math.round(between(530e3, 1.6e6) / toneHertz) * toneHertz;
    const levelVoltsRms = between(0.02, kind === 'crystal' ? 1 : 5);
    const tap = pick(kind === 'crystal' ? [0.2, 0.35, 0.5] : [0.5, 1]);
    const tunedCircuit = k % 2 === 0 ? stiff(between(15, 80), pick([0, 0, 2000])) : coil(between(60, 150), tap);
    const plain = heardAt({ ...plainCircuit(kind), tunedCircuit }, levelVoltsRms, carrierHertz);
    const { circuit, parts } = varied(plain, kind, pick, between);
    const tuned = tunedCircuit.kind === 'coil' ? `coil, tap ${tap}` : `Q ${tunedCircuit.loadedQ.toFixed(0)}`;
    const at = `${(carrierHertz / 1e3).toFixed(0)} kHz, ${levelVoltsRms.toPrecision(2)} V, ${tuned}`;
    return { said: `${parts}; ${at}; ${toneHertz} Hz at ${depth * 100} %`, circuit, toneHertz, depth };
  });
}

type Pick = <T>(values: readonly T[]) => T;
type Between = (least: number, most: number) => number;

function varied(
  plain: DetectorCircuit,
  kind: OtherKind,
  pick: Pick,
  between: Between,
): { circuit: DetectorCircuit; parts: string } {
  const hertz = plain.station.carrierHertz;
  const picofarads = (farads: number): string => `${(farads * 1e12).toFixed(0)} pF`;
  const kilohms = (ohms: number): string => `${(ohms / 1e3).toFixed(0)} kΩ`;
  const { diode } = plain.detector;
  if (diode) {
    const loadOhms = kind === 'diode' ? between(100e3, 1e6) : pick([null, between(20e3, 100e3)]);
    const least = loadOhms === null ? 500e-12 : 50 / (hertz * loadOhms);
    const bypassFarads = between(least, 4 * least);
    const filterOhms = kind === 'diode' ? pick([null, 47e3]) : null;
    const law =
      kind === 'crystal'
        ? { ...CRYSTAL, saturationAmps: between(1e-7, 3e-6), idealityVolts: between(0.027, 0.04), seriesOhms: 150 }
        : { ...VACUUM_DIODE, perveance: between(3e-4, 2e-3) };
    const changed = {
      ...diode,
      law,
      loadOhms,
      bypassFarads,
      filterOhms,
      filterFarads: filterOhms === null ? 0 : 100e-12,
    };
    return {
      circuit: {
        ...plain,
        detector: { ...plain.detector, diode: changed },
        output: loadOhms === null ? plain.output : INTO_A_GRID,
      },
      parts: `${kind}, ${loadOhms === null ? 'phones' : kilohms(loadOhms)}, ${picofarads(bypassFarads)}`,
    };
  }
  const name = pick(['27', '76', '6SN7-GT', '6SL7-GT', '12AX7']);
  const supplyVolts = between(90, 250);
  const { tube } = tubeFromCatalogue(name, { supplyVolts, strays: SOCKET_STRAYS });
  if (kind === 'infinite impedance') {
    const ohms = between(20e3, 150e3);
    const farads = between(20 / (hertz * ohms), 80 / (hertz * ohms));
    return {
      circuit: {
        ...plain,
        tube,
        plate: { ...plain.plate, supplyVolts },
        detector: { ...plain.detector, cathode: { ohms, farads, biasVolts: 0 } },
      },
      parts: `${name} at ${supplyVolts.toFixed(0)} V, ${kilohms(ohms)}, ${picofarads(farads)}`,
    };
  }
  const ohms = pick([null, between(10e3, 50e3)]);
  const bypassFarads = between(100e-12, 1e-9);
  const plateOhms = between(47e3, 220e3);
  // near cut-off by a battery
  const biasVolts = ohms === null ? (-0.85 * supplyVolts) / tube.law.mu : 0;
  return {
    circuit: {
      ...plain,
      tube,
      plate: { supplyVolts, bypassFarads, load: { kind: 'resistor', ohms: plateOhms } },
      detector: { ...plain.detector, cathode: { ohms, farads: ohms === null ? 0 : 1e-6, biasVolts } },
    },
    parts:
      `${name} at ${supplyVolts.toFixed(0)} V, ${kilohms(plateOhms)}, ${picofarads(bypassFarads)}, ` +
      (ohms === null ? `battery ${biasVolts.toFixed(1)} V` : `cathode ${kilohms(ohms)}`),
  };
}
