import type {
  CathodeParts,
  DetectorCircuit,
  DiodeLaw,
  DiodeParts,
  GridLeakDetector,
} from '../engine/circuits/circuit.ts';
import { restPoint } from '../engine/circuits/rest-point.ts';
import { InputError } from '../engine/errors.ts';
import { thermalVolts } from '../engine/tubes/thermal-voltage.ts';
import type { CircuitList } from './schema.ts';

/** Room temperature of a crystal, K. */
const ROOM_KELVIN = 295;

interface DiodeKind {
  readonly law: DiodeLaw;
  readonly capacitanceFarads: number;
  readonly source: string;
}

/** Kinds of diode and crystal that a list may name. */
export const DIODE_KINDS: Readonly<Record<'vacuum' | 'germanium' | 'galena', DiodeKind>> = {
  vacuum: {
    // a small diode section: some mA at 10 V; knee of an oxide cathode at 1050 K
    law: { kind: '3/2', perveance: 0.4e-3, sharpness: 1 / (1.5 * thermalVolts(1050)) },
    capacitanceFarads: 3e-12,
    source: 'a diode section of a receiving tube: typical, from memory',
  },
  germanium: {
    law: {
      kind: 'exponential',
      saturationAmps: 0.4e-6,
      idealityVolts: 1.15 * thermalVolts(ROOM_KELVIN),
      seriesOhms: 20,
    },
    capacitanceFarads: 1e-12,
    source: 'a small germanium point-contact diode: typical, from memory',
  },
  galena: {
    law: { kind: 'exponential', saturationAmps: 1e-6, idealityVolts: 1.7 * thermalVolts(ROOM_KELVIN), seriesOhms: 300 },
    capacitanceFarads: 2e-12,
    source: 'galena with a good contact: typical, from memory',
  },
};

/** Plate current of a plate bend without carrier, A: about 0.2 mA. Common practice, from memory. */
const PLATE_BEND_AMPS = 0.2e-3;

/** The detector of a list; `gridLeak` is its part as a grid leak, which only that kind uses. Throws InputError. */
export function detectorOf(list: CircuitList, gridLeak: () => GridLeakDetector): GridLeakDetector {
  const { detector } = list;
  if (detector.kind === 'grid leak') return gridLeak();
  if (detector.law !== 'tube') {
    throw wrong('law-of-grid-leak', 'detector.law', detector.law, 'tube: the textbook laws are those of a grid leak');
  }
  const common: GridLeakDetector = {
    kind: detector.kind,
    law: 'tube',
    gridCapacitorFarads: detector['grid capacitor'],
    leakOhms: detector.leak ?? 1e6,
    leakPosition: 'to cathode',
    leakReturnVolts: 0,
    capacitorLeakageOhms: null,
    chargeOhms: null,
  };
  if (detector.kind === 'diode' || detector.kind === 'crystal') return { ...common, diode: diodeOf(list) };
  return { ...common, cathode: cathodeOf(list) };
}

function cathodeOf(list: CircuitList): CathodeParts {
  const { detector } = list;
  if (detector.kind === 'infinite impedance') {
    const ohms = detector['cathode resistor'] === undefined ? 47e3 : detector['cathode resistor'];
    if (ohms === null) {
      throw wrong(
        'no-cathode-load',
        'detector.cathode resistor',
        'none',
        'a resistor such as 47k: the output stands across it',
      );
    }
    return { ohms, farads: detector['cathode capacitor'] ?? 220e-12, biasVolts: 0 };
  }
  const ohms = detector['cathode resistor'] ?? null;
  const farads = detector['cathode capacitor'] ?? 10e-6;
  if (detector.bias !== undefined && ohms !== null) {
    throw wrong('two-biases', 'detector.bias', 'a bias beside a cathode resistor', 'one of them');
  }
  return { ohms, farads, biasVolts: detector.bias ?? 0 };
}

/** Whether the list leaves a plate bend's cathode resistor to be found for its rest current. */
export function wantsRestCurrent(list: CircuitList): boolean {
  const { detector } = list;
  return (
    detector.kind === 'plate bend' && detector.bias === undefined && (detector['cathode resistor'] ?? null) === null
  );
}

/** A plate bend with the cathode resistor that gives the list's rest current without carrier. Throws InputError. */
export function biasedForCurrent(circuit: DetectorCircuit, list: CircuitList): DetectorCircuit {
  const amps = list.detector['rest current'] ?? PLATE_BEND_AMPS;
  const parts = circuit.detector.cathode as CathodeParts;
  const quiet = { ...circuit, station: { ...circuit.station, levelVoltsRms: 0 } };
  const withOhms = (ohms: number, of: DetectorCircuit): DetectorCircuit => ({
    ...of,
    detector: { ...of.detector, cathode: { ...parts, ohms } },
  });
  const drawn = (ohms: number): number => restPoint(withOhms(ohms, quiet)).currents.plateAmps;
  let [low, high] = [1, 1e7];
  if (drawn(low) < amps || drawn(high) > amps) {
    throw wrong(
      'rest-current-unreachable',
      'detector.rest current',
      `${amps} A`,
      'a current that this tube draws with this supply and load, or a bias of your own',
    );
  }
  for (let k = 0; k < 60; k++) {
    const middle = Math.sqrt(low * high);
    if (drawn(middle) > amps) low = middle;
    else high = middle;
  }
  return withOhms(Math.sqrt(low * high), circuit);
}

function diodeOf(list: CircuitList): DiodeParts {
  const { detector, output } = list;
  const crystal = detector.kind === 'crystal';
  const kind = DIODE_KINDS[detector.diode ?? (crystal ? 'germanium' : 'vacuum')];
  const direct = output.into === 'phones' && !output.matching;
  const standard = crystal ? (direct || output.matching ? null : 100e3) : 500e3;
  const loadOhms = detector['diode load'] === undefined ? standard : detector['diode load'];
  if (loadOhms === null && !direct && !output.matching) {
    throw wrong(
      'no-diode-load',
      'detector.diode load',
      'none',
      'a resistor such as 100k: what it feeds passes no direct current',
    );
  }
  return {
    law: diodeLaw(list, kind.law),
    loadOhms,
    bypassFarads: detector['diode bypass'] ?? (crystal ? 1e-9 : 100e-12),
    filterOhms: detector['filter resistor'] ?? null,
    filterFarads: detector['filter capacitor'],
    volume: detector.volume,
    capacitanceFarads: detector['diode capacitance'] ?? kind.capacitanceFarads,
  };
}

function diodeLaw(list: CircuitList, known: DiodeLaw): DiodeLaw {
  const { detector } = list;
  const { perveance, ideality } = detector;
  const saturation = detector['saturation current'];
  const series = detector['series resistance'];
  if (known.kind === '3/2') {
    if (saturation !== undefined || ideality !== undefined || series !== undefined) {
      throw wrong(
        'not-of-a-tube',
        'detector.saturation current',
        "a crystal's values",
        'perveance, or diode: germanium or galena',
      );
    }
    return { ...known, perveance: perveance ?? known.perveance };
  }
  if (perveance !== undefined) {
    throw wrong('not-of-a-crystal', 'detector.perveance', `${perveance}`, 'a saturation current, or diode: vacuum');
  }
  return {
    kind: 'exponential',
    saturationAmps: saturation ?? known.saturationAmps,
    idealityVolts: ideality === undefined ? known.idealityVolts : ideality * thermalVolts(ROOM_KELVIN),
    seriesOhms: series ?? known.seriesOhms,
  };
}

function wrong(code: string, where: string, got: string, expected: string): InputError {
  return new InputError({ code, where, got, expected });
}
