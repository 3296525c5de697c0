import { formatQuantity, type QuantityKind } from '../engine/parts/format-quantity.ts';
import { stepPreferred } from '../engine/parts/preferred-values.ts';
import type { CircuitRecord } from '../results/result.ts';

/** How a value is stepped: through preferred values, by 1-2-5, by equal steps, or through known parts. */
export type Stepping =
  | { readonly by: 'preferred' }
  | { readonly by: '1-2-5' }
  | { readonly by: 'equal'; readonly step: number }
  | { readonly by: 'list'; readonly values: readonly number[] };

/** A value of the circuit that can be changed: its key in the parts list, where it stands in the record, how it steps. */
export interface PartValue {
  readonly key: string;
  readonly label: string;
  readonly kind: QuantityKind;
  readonly path: readonly string[];
  readonly stepping: Stepping;
  /** What is written for `absent`; null where the circuit cannot be without it. */
  readonly absent: '0' | 'none' | null;
}

const PREFERRED = { by: 'preferred' } as const;
/** Voltages of batteries and usual supplies, V. Common practice, no source. */
const SUPPLIES = [22.5, 45, 67.5, 90, 112.5, 135, 157.5, 180, 250, 300];
/** Ratios of interstage transformers. Common practice, no source. */
const RATIOS = [1, 1.5, 2, 2.5, 3, 3.5, 4, 5, 6, 8, 10];

function value(
  key: string,
  label: string,
  kind: QuantityKind,
  path: string,
  absent: PartValue['absent'] = null,
  stepping: Stepping = PREFERRED,
): PartValue {
  return { key, label, kind, path: path.split('.'), stepping, absent };
}

const ALWAYS: readonly PartValue[] = [
  value('station.carrier', 'Carrier', 'frequency', 'station.carrierHertz', null, { by: 'equal', step: 10_000 }),
  value('station.level', 'Level at the tap', 'voltage', 'station.levelVoltsRms', null, { by: '1-2-5' }),
  value('station.modulation', 'Modulation', 'fraction', 'station.modulation', null, { by: 'equal', step: 0.1 }),
  value('detector.grid capacitor', 'Grid capacitor', 'capacitance', 'detector.gridCapacitorFarads'),
  value('detector.leak', 'Grid leak', 'resistance', 'detector.leakOhms'),
  value('plate.supply', 'Supply', 'voltage', 'plate.supplyVolts', null, { by: 'list', values: SUPPLIES }),
  value('plate.bypass', 'Plate bypass', 'capacitance', 'plate.bypassFarads', '0'),
];
/** What stands in the cathode lead of a plate bend or an infinite-impedance detector. */
const CATHODE = [
  value('detector.cathode resistor', 'Cathode resistor', 'resistance', 'detector.cathodeOhms'),
  value('detector.cathode capacitor', 'Cathode capacitor', 'capacitance', 'detector.cathodeFarads', '0'),
];
const BIAS = value('detector.bias', 'Bias battery', 'voltage', 'detector.biasVolts', null, { by: 'equal', step: 0.5 });
const DIODE = [
  value('detector.diode load', 'Diode load', 'resistance', 'detector.loadOhms'),
  value('detector.diode bypass', 'Diode bypass', 'capacitance', 'detector.bypassFarads', '0'),
  value('detector.filter resistor', 'Filter resistor', 'resistance', 'detector.filterOhms', 'none'),
  value('detector.filter capacitor', 'Filter capacitor', 'capacitance', 'detector.filterFarads', '0'),
  value('detector.volume', 'Volume control', 'fraction', 'detector.volume', null, { by: 'equal', step: 0.1 }),
];
const STIFF = [value('tuned circuit.loaded Q', 'Loaded Q', 'number', 'tunedCircuit.loadedQ')];
const COIL = [
  value('tuned circuit.coil', 'Coil', 'inductance', 'tunedCircuit.coilHenries'),
  value('tuned circuit.unloaded Q', 'Unloaded Q', 'number', 'tunedCircuit.unloadedQ', null, {
    by: 'equal',
    step: 10,
  }),
  value('tuned circuit.tap', 'Tap', 'number', 'tunedCircuit.tap', null, { by: 'equal', step: 0.1 }),
];
const LOADS: Readonly<Record<CircuitRecord['plate']['load']['kind'], readonly PartValue[]>> = {
  resistor: [value('plate.load.resistance', 'Plate load', 'resistance', 'plate.load.ohms')],
  choke: [
    value('plate.load.inductance', 'Choke', 'inductance', 'plate.load.henries'),
    value('plate.load.dc resistance', 'Choke, DC resistance', 'resistance', 'plate.load.dcOhms'),
    value('plate.load.core loss', 'Choke, core loss', 'resistance', 'plate.load.coreLossOhms', 'none'),
    value('plate.load.self capacitance', 'Choke, own capacitance', 'capacitance', 'plate.load.selfFarads', '0'),
  ],
  transformer: [
    value('plate.load.ratio', 'Transformer ratio', 'ratio', 'plate.load.ratio', null, { by: 'list', values: RATIOS }),
    value('plate.load.primary inductance', 'Primary inductance', 'inductance', 'plate.load.primaryHenries'),
    value('plate.load.primary dc resistance', 'Primary, DC resistance', 'resistance', 'plate.load.primaryDcOhms'),
    value('plate.load.leakage', 'Leakage inductance', 'inductance', 'plate.load.leakageHenries'),
    value('plate.load.core loss', 'Core loss', 'resistance', 'plate.load.coreLossOhms', 'none'),
    value('plate.load.primary capacitance', 'Primary capacitance', 'capacitance', 'plate.load.primaryFarads', '0'),
    value('plate.load.secondary dc resistance', 'Secondary, DC resistance', 'resistance', 'plate.load.secondaryDcOhms'),
    value(
      'plate.load.secondary capacitance',
      'Secondary capacitance',
      'capacitance',
      'plate.load.secondaryFarads',
      '0',
    ),
  ],
  phones: [
    value('plate.load.dc resistance', 'Phones, DC resistance', 'resistance', 'plate.load.dcOhms'),
    value('plate.load.inductance', 'Phones, inductance', 'inductance', 'plate.load.henries'),
    value('plate.load.eddy loss', 'Phones, loss of the iron', 'resistance', 'plate.load.eddyLossOhms', 'none'),
    value('plate.load.self capacitance', 'Phones, own capacitance', 'capacitance', 'plate.load.selfFarads', '0'),
  ],
};
const CARRIER_CHOKE = [
  value('plate.carrier choke', 'Carrier choke', 'inductance', 'plate.carrierChoke.henries', 'none'),
  value('plate.second bypass', 'Second bypass', 'capacitance', 'plate.carrierChoke.bypassFarads', '0'),
];
const DROPPING = [
  value('plate.dropping resistor', 'Dropping resistor', 'resistance', 'plate.dropping.ohms', 'none'),
  value('plate.dropping capacitor', 'Dropping capacitor', 'capacitance', 'plate.dropping.farads', '0'),
];
const OUTPUT = [
  value('output.coupling', 'Coupling capacitor', 'capacitance', 'output.couplingFarads'),
  value('output.load resistance', 'Resistance that follows', 'resistance', 'output.loadOhms'),
  value('output.load capacitance', 'Capacitance that follows', 'capacitance', 'output.loadFarads', '0'),
];

/** The values that this circuit has, in the order in which the signal meets them. */
export function partValues(circuit: CircuitRecord): readonly PartValue[] {
  const { tunedCircuit, detector, plate, output } = circuit;
  const [carrier, level, modulation, gridCapacitor, leak, supply, bypass] = ALWAYS as PartValue[];
  const there = (parts: readonly PartValue[]): PartValue[] => parts.filter((part) => valueIn(circuit, part) !== null);
  const diode = detector.kind === 'diode' || detector.kind === 'crystal';
  const filtered = valueAt(circuit, ['detector', 'filterOhms']) !== null;
  const follower = detector.kind === 'infinite impedance';
  const intoPhones = plate.load.kind === 'phones' && !diode && !follower;
  const feeds = OUTPUT.filter(({ path }) => path[1] !== 'couplingFarads' || output.couplingFarads !== null);
  return [
    carrier!,
    level!,
    modulation!,
    ...(tunedCircuit.coilHenries === null ? STIFF : COIL),
    ...(detector.kind === 'grid leak' ? [gridCapacitor!, leak!] : []),
    ...(valueAt(circuit, ['detector', 'cathodeOhms']) === null ? [] : CATHODE),
    ...(valueIn(circuit, BIAS) ? [BIAS] : []),
    ...(diode ? there(DIODE).filter(({ path }) => path[1] !== 'filterFarads' || filtered) : [bypass!]),
    ...(plate.carrierChoke && !diode && !follower ? CARRIER_CHOKE : []),
    ...(diode || follower ? [] : LOADS[plate.load.kind]),
    ...(plate.dropping && !diode ? DROPPING : []),
    ...(diode ? [] : [supply!]),
    ...(intoPhones ? [] : feeds),
  ];
}

/** The value of a part in base units; null: absent. */
export function valueIn(circuit: CircuitRecord, { path }: PartValue): number | null {
  return valueAt(circuit, path);
}

/** A number deep in the record; null where there is none. */
export function valueAt(circuit: CircuitRecord, path: readonly string[]): number | null {
  let at: unknown = circuit;
  for (const name of path) at = typeof at === 'object' && at !== null ? (at as Record<string, unknown>)[name] : null;
  return typeof at === 'number' ? at : null;
}

/** A value as it is written beside its part. */
export function valueText(circuit: CircuitRecord, part: PartValue): string {
  const found = valueIn(circuit, part);
  if (found === null || (found === 0 && part.absent === '0')) return 'absent';
  return formatQuantity(found, part.kind, part.kind === 'inductance' ? 3 : 4);
}

/** What is written into the list for the value some steps up or down; null where there is none. */
export function steppedText(circuit: CircuitRecord, part: PartValue, steps: number): string | null {
  const now = valueIn(circuit, part);
  if (now === null || now === 0) {
    // from nothing the first step up is the smallest usual value
    const first = {
      capacitance: '10 pF',
      resistance: '100 kΩ',
      inductance: '10 mH',
      voltage: '1 mV',
      fraction: '10 %',
    };
    return steps > 0 ? (first[part.kind as keyof typeof first] ?? null) : null;
  }
  const next = stepped(now, part.stepping, steps);
  // a bias is below zero and stays there
  return next > 0 === now > 0 && next !== 0 ? formatQuantity(next, part.kind, 6) : null;
}

function stepped(now: number, stepping: Stepping, steps: number): number {
  switch (stepping.by) {
    case 'preferred':
      return stepPreferred(now, steps, 'E12');
    case 'equal':
      return Number(((Math.round(now / stepping.step) + steps) * stepping.step).toPrecision(12));
    case '1-2-5':
      return oneTwoFive(now, steps);
    case 'list': {
      const at = stepping.values.findIndex((one) => one >= now * (1 - 1e-9));
      const exact = at >= 0 && Math.abs((stepping.values[at] as number) / now - 1) < 1e-9;
      const index = (at < 0 ? stepping.values.length : at) + (steps > 0 && !exact ? steps - 1 : steps);
      return stepping.values[Math.max(0, Math.min(stepping.values.length - 1, index))] as number;
    }
  }
}

function oneTwoFive(now: number, steps: number): number {
  const digits = [1, 2, 5];
  const all = [-7, -6, -5, -4, -3, -2, -1, 0, 1, 2].flatMap((decade) => digits.map((d) => Number(`${d}e${decade}`)));
  const at =
    steps > 0 ? all.findLastIndex((one) => one <= now * (1 + 1e-9)) : all.findIndex((one) => one >= now * (1 - 1e-9));
  return all[Math.max(0, Math.min(all.length - 1, at + steps))] as number;
}
