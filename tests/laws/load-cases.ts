import type { DetectorCircuit, Output, Plate, PlateLoad } from '../../src/engine/circuits/circuit.ts';
import { gridLeak } from './grid-leak-circuit.ts';
import { choke, earpiece, loaded, matching, phones, transformer } from './loaded-circuits.ts';
import { FIVE_TUBES } from './seeded-cases.ts';
import { overDecades, seededNumbers } from './seeded-numbers.ts';
import { COIL } from './tone-pair.ts';

/** A circuit with one tone to be proved on it. */
export interface LoadCase {
  readonly said: string;
  readonly circuit: DetectorCircuit;
  readonly hertz: number;
  readonly depth: number;
}

/** What stands at the plate and behind it. */
interface LoadChoice {
  readonly said: string;
  readonly load: PlateLoad;
  readonly plate?: Partial<Plate>;
  readonly output?: Partial<Output>;
}

interface Draw {
  readonly between: (least: number, most: number) => number;
  readonly pick: <T>(values: readonly T[]) => T;
}

const ohms = (value: number): string => `${(value / 1e3).toFixed(1)} kΩ`;
const picofarads = (value: number): string => `${(value * 1e12).toFixed(0)} pF`;

function resistor({ between }: Draw): PlateLoad & { readonly kind: 'resistor' } {
  return { kind: 'resistor', ohms: between(10e3, 220e3) };
}

/** Each kind of load with its values anywhere in the range of what builders use. */
const KINDS: Readonly<Record<string, (draw: Draw) => LoadChoice>> = {
  choke: ({ between }) => {
    const henries = between(20, 400);
    const load: PlateLoad = {
      ...choke('large'),
      henries,
      dcOhms: 25 * henries,
      coreLossOhms: between(3e3, 9e3) * henries,
      selfFarads: between(30e-12, 150e-12),
    };
    return { said: `choke ${henries.toFixed(0)} H`, load };
  },
  transformer: ({ between, pick }) => {
    const name = pick(['good 1:3', 'plain 1:3', 'early 1:5'] as const);
    const part = transformer(name);
    const load: PlateLoad = {
      ...part,
      leakageHenries: part.leakageHenries * between(0.6, 1.5),
      secondaryFarads: between(50e-12, 150e-12),
      coreLossOhms: pick([part.coreLossOhms, null]),
    };
    const loadOhms = pick([100e3, 1e6, null]);
    return { said: `${name} into ${loadOhms === null ? 'a grid alone' : ohms(loadOhms)}`, load, output: { loadOhms } };
  },
  'phones in the plate lead': ({ between, pick }) => {
    const name = pick(['2000 ohm', '4000 ohm'] as const);
    const part = phones(name);
    const load: PlateLoad = {
      ...part,
      henries: part.henries * between(0.5, 2),
      eddyLossOhms: pick([part.eddyLossOhms, null]),
      selfFarads: between(100e-12, 1e-9),
    };
    return { said: `phones ${name}`, load };
  },
  'phones through a matching transformer': (draw) => {
    const load = resistor(draw);
    const ratio = 1 / draw.between(2, 6);
    const fed = { couplingFarads: draw.between(20e-9, 1e-6), loadOhms: null, loadFarads: 0 };
    const output = { ...fed, matching: matching(ratio), phones: phones('2000 ohm') };
    return { said: `${ohms(load.ohms)}, ${(1 / ratio).toFixed(1)}:1 to phones`, load, output };
  },
  'a low-impedance earpiece through a matching transformer': (draw) => {
    const load = draw.pick([resistor(draw), choke('small')]);
    const ratio = 1 / draw.between(15, 50);
    const fed = { couplingFarads: draw.between(100e-9, 2e-6), loadOhms: null, loadFarads: 0 };
    return {
      said: `${load.kind}, ${(1 / ratio).toFixed(0)}:1 to an earpiece`,
      load,
      output: { ...fed, matching: matching(ratio), phones: earpiece },
    };
  },
  'crystal earpiece': (draw) => {
    const load = resistor(draw);
    const loadOhms = draw.pick([20e6, 100e3]);
    const output = { couplingFarads: draw.between(1e-9, 100e-9), loadOhms, loadFarads: draw.between(500e-12, 2e-9) };
    return { said: `${ohms(load.ohms)}, ${picofarads(output.loadFarads)} with ${ohms(loadOhms)}`, load, output };
  },
  'ceramic earpiece': (draw) => {
    const load = draw.pick([resistor(draw), choke('small')]);
    const output = { couplingFarads: draw.between(10e-9, 500e-9), loadOhms: 20e6, loadFarads: 15e-9 };
    return { said: `${load.kind}, 15 nF`, load, output };
  },
  'carrier choke with a second bypass': (draw) => {
    const load = draw.pick([resistor(draw), choke('large'), transformer('good 1:3'), phones('2000 ohm')]);
    const henries = draw.between(2.5e-3, 85e-3);
    const bypassFarads = draw.pick([0, draw.between(50e-12, 2e-9)]);
    const carrierChoke = { henries, dcOhms: 3e3 * henries, selfFarads: draw.between(1e-12, 8e-12), bypassFarads };
    const said = `${load.kind}, ${(henries * 1e3).toFixed(1)} mH and ${picofarads(bypassFarads)}`;
    return { said, load, plate: { carrierChoke } };
  },
  'dropping resistor': (draw) => {
    const load = draw.pick([resistor(draw), choke('small'), transformer('plain 1:3'), phones('4000 ohm')]);
    const dropping = { ohms: draw.between(1e3, 50e3), farads: draw.between(100e-9, 8e-6) };
    const said = `${load.kind}, ${ohms(dropping.ohms)} with ${(dropping.farads * 1e6).toFixed(1)} µF`;
    return { said, load, plate: { dropping } };
  },
};

export const LOAD_KINDS: readonly string[] = Object.keys(KINDS);

/**
 * Seeded circuits with one kind of load: 530 kHz to 1.6 MHz, 5 mV to 5 V rms, stiff and coil sources, leak 220 kΩ to
 * 5 MΩ, supply 22 to 135 V, tones from 50 Hz to 10 kHz.
 */
export function loadCases(kind: string, count: number): LoadCase[] {
  const make = KINDS[kind];
  if (!make) throw new Error(`no load ${kind}`);
  const next = seededNumbers(1000 + LOAD_KINDS.indexOf(kind));
  const between = (least: number, most: number): number => overDecades(next(), least, most);
  const pick = <T>(values: readonly T[]): T => values[Math.floor(next() * values.length)] as T;
  return Array.from({ length: count }, () => {
    const { said, load, plate, output } = make({ between, pick });
    const [tube, filamentVolts] = pick(FIVE_TUBES);
    const hertz = pick([50, 100, 400, 1000, 2000, 5000, 8000, 10_000]);
    const depth = pick([0.3, 0.8]);
    const levelVoltsRms = between(5e-3, 5);
    const source = pick(['stiff', 'coil'] as const);
    const bypassFarads = pick([0, between(50e-12, 2e-9), between(50e-12, 2e-9)]);
    const choice = {
      tube,
      levelVoltsRms,
      // a whole multiple of the tone, as the reference takes it
      carrierHertz: Math.round(between(530e3, 1.6e6) / hertz) * hertz,
      modulation: depth,
      tunedCircuit: source === 'coil' ? COIL : ({ kind: 'stiff', loadedQ: between(10, 100), detuneHertz: 0 } as const),
      gridCapacitorFarads: between(50e-12, 500e-12),
      leakOhms: between(220e3, 5e6),
      leakPosition: pick(['to cathode', 'across capacitor'] as const),
      leakReturnVolts: pick([0, filamentVolts]),
      supplyVolts: between(22, 135),
      bypassFarads,
    };
    return {
      said: `${said}; ${tube} at ${choice.supplyVolts.toFixed(0)} V, bypass ${picofarads(bypassFarads)}, ${levelVoltsRms.toPrecision(2)} V, ${source}; ${hertz} Hz at ${100 * depth} %`,
      circuit: loaded(gridLeak(choice), load, { ...(plate ? { plate } : {}), ...(output ? { output } : {}) }),
      hertz,
      depth,
    };
  });
}
