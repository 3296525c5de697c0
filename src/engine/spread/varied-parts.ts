import type { DetectorCircuit } from '../circuits/circuit.ts';
import type { QuantityKind } from '../parts/format-quantity.ts';

/** How a part is made, which gives it a tolerance where the list states none; null: it is then taken as it stands. */
export type PartFamily = 'capacitor' | 'resistor' | 'tube' | 'grid current' | null;

/** A part that may lie off its nominal value. */
export interface VariedPart {
  /** Its dotted key on the parts list. */
  readonly key: string;
  readonly name: string;
  readonly family: PartFamily;
  readonly kind: QuantityKind;
  /** Where its value stands in a circuit, and what goes along with it. */
  readonly paths: readonly [string, ...string[]];
  /** −1: the circuit holds its reciprocal. */
  readonly power: 1 | -1;
}

function part(
  key: string,
  name: string,
  family: PartFamily,
  kind: QuantityKind,
  path: string,
  ...along: readonly string[]
): VariedPart {
  return { key, name, family, kind, paths: [path, ...along], power: 1 };
}

/** A value of the plate load. */
function ofLoad(name: string, kind: QuantityKind, field: string, ...along: readonly string[]): VariedPart {
  const family = field === 'ohms' ? 'resistor' : null;
  const inLoad = (one: string): string => `plate.load.${one}`;
  return part(inLoad(name), `load, ${name}`, family, kind, inLoad(field), ...along.map(inLoad));
}

/**
 * Every part that can vary, in the order in which random numbers are drawn for them: a part's draws do not depend on
 * which of the others vary. New ones go to the end, so that a seed keeps its meaning.
 */
export const VARIED_PARTS: readonly VariedPart[] = [
  part('detector.grid capacitor', 'grid capacitor', 'capacitor', 'capacitance', 'detector.gridCapacitorFarads'),
  part('detector.leak', 'leak', 'resistor', 'resistance', 'detector.leakOhms'),
  part('plate.bypass', 'bypass', 'capacitor', 'capacitance', 'plate.bypassFarads'),
  ofLoad('resistance', 'resistance', 'ohms'),
  part('output.coupling', 'coupling', 'capacitor', 'capacitance', 'output.couplingFarads'),
  part('output.load resistance', 'resistance it feeds', 'resistor', 'resistance', 'output.loadOhms'),
  part('detector.tube', 'tube, current and slope', 'tube', 'number', 'tube.law.G'),
  part('tube.grid current.at zero volts', 'grid current at 0 V', 'grid current', 'current', 'tube.law.Gg'),
  part('plate.dropping resistor', 'dropping resistor', 'resistor', 'resistance', 'plate.dropping.ohms'),
  part('plate.dropping capacitor', 'dropping capacitor', 'capacitor', 'capacitance', 'plate.dropping.farads'),
  part('plate.second bypass', 'second bypass', 'capacitor', 'capacitance', 'plate.carrierChoke.bypassFarads'),
  part('plate.carrier choke', 'carrier choke', null, 'inductance', 'plate.carrierChoke.henries'),
  part('plate.supply', 'supply', null, 'voltage', 'plate.supplyVolts'),
  part('output.load capacitance', 'capacitance it feeds', null, 'capacitance', 'output.loadFarads'),
  part('tuned circuit.coil', 'coil', null, 'inductance', 'tunedCircuit.coilHenries'),
  // a tuning capacitance stands for the coil that it tunes to the carrier
  {
    ...part('tuned circuit.capacitor', 'tuning capacitor', null, 'capacitance', 'tunedCircuit.coilHenries'),
    power: -1,
  },
  part('tuned circuit.unloaded Q', 'unloaded Q', null, 'number', 'tunedCircuit.unloadedQ'),
  part('tuned circuit.loaded Q', 'loaded Q', null, 'number', 'tunedCircuit.loadedQ'),
  ofLoad('inductance', 'inductance', 'henries'),
  ofLoad('dc resistance', 'resistance', 'dcOhms'),
  ofLoad('core loss', 'resistance', 'coreLossOhms'),
  ofLoad('eddy loss', 'resistance', 'eddyLossOhms'),
  ofLoad('self capacitance', 'capacitance', 'selfFarads'),
  ofLoad(
    'primary inductance',
    'inductance',
    'primaryHenries',
    'falling.henriesWithoutCurrent',
    'falling.henriesAtAmps',
  ),
  ofLoad('primary dc resistance', 'resistance', 'primaryDcOhms'),
  ofLoad('leakage', 'inductance', 'leakageHenries'),
  ofLoad('primary capacitance', 'capacitance', 'primaryFarads'),
  ofLoad('secondary dc resistance', 'resistance', 'secondaryDcOhms'),
  ofLoad('secondary capacitance', 'capacitance', 'secondaryFarads'),
  part(
    'detector.grid capacitor leakage',
    "grid capacitor's leakage",
    null,
    'resistance',
    'detector.capacitorLeakageOhms',
  ),
];

/**
 * A part's nominal value in a circuit, base SI units; null where the circuit has no such part. A tube's is 1: its
 * current and slope are taken together as a factor on those of its law.
 */
export function nominalValue(circuit: DetectorCircuit, { paths: [path], family, power }: VariedPart): number | null {
  const value = path.split('.').reduce<unknown>(memberOf, circuit);
  if (typeof value !== 'number' || !(value > 0)) return null;
  if (family === 'tube') return 1;
  const { law } = circuit.tube;
  if (family === 'grid current') return law.Gg * (Math.LN2 / law.Cg) ** law.xi;
  return power === 1 ? value : 1 / ((2 * Math.PI * circuit.station.carrierHertz) ** 2 * value);
}

/** The circuit with each part at its factor times the nominal value. */
export function withFactors(
  circuit: DetectorCircuit,
  parts: readonly VariedPart[],
  factors: ArrayLike<number>,
): DetectorCircuit {
  return parts.reduce((changed, { paths, power }, k) => {
    const factor = factors[k] as number;
    return paths.reduce((one, path) => scaledAt(one, path.split('.'), power === 1 ? factor : 1 / factor), changed);
  }, circuit);
}

/** A copy with one number scaled; as it was where there is no number at that path. */
function scaledAt<Held>(held: Held, path: readonly string[], factor: number): Held {
  const [first, ...rest] = path;
  if (first === undefined) return (typeof held === 'number' ? held * factor : held) as Held;
  if (typeof held !== 'object' || held === null || !(first in held)) return held;
  return { ...held, [first]: scaledAt(memberOf(held, first), rest, factor) };
}

function memberOf(held: unknown, key: string): unknown {
  return typeof held === 'object' && held !== null ? Reflect.get(held, key) : undefined;
}
