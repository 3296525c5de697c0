import type { DetectorCircuit } from '../engine/circuits/circuit.ts';
import { InputError } from '../engine/errors.ts';
import type { QuantityKind } from '../engine/parts/format-quantity.ts';
import { nearestName } from '../engine/parts/nearest-name.ts';
import type { QuantityRange } from '../engine/parts/quantities.ts';
import { unwrapped } from './dotted-keys.ts';
import { listed, type QuantityLimits, quantityKinds } from './fields.ts';
import { LOAD_KEYS, MAIN_VALUE } from './plate-load.ts';
import { CHANGEABLE, type CircuitList } from './schema.ts';
import { plainWords } from './words.ts';

/** A part of the list whose value can be chosen: its key, what it holds and what it may be. */
export interface ChosenPart {
  readonly key: string;
  /** The last words of the key: `bypass`. */
  readonly name: string;
  readonly kind: QuantityKind;
  readonly limits: QuantityLimits;
}

/** Names that a fault offers; any other key that holds a quantity is accepted too. */
export const USUAL_PARTS = [
  'bypass',
  'leak',
  'grid capacitor',
  'load',
  'coupling',
  'supply',
  'level',
  'coil',
  'tap',
  'unloaded Q',
  'ratio',
] as const;

const ACCEPTED = `${USUAL_PARTS.join(', ')}, or a key that holds a value, such as plate.bypass`;

/** Every key with a value on a scale of ratios: nothing that may be negative, no words. */
function scaleKeys(): Map<string, ChosenPart> {
  const parts = new Map<string, ChosenPart>();
  for (const [key, field] of CHANGEABLE) {
    const held = quantityKinds.get(field) ?? quantityKinds.get(unwrapped(field));
    if (!held || held.kind === 'fraction' || (held.limits.atLeast ?? 0) < 0) continue;
    parts.set(key, {
      key,
      name:
        key === 'plate.load.resistance'
          ? 'load'
          : key.startsWith('strays.')
            ? `stray ${lastWords(key)}`
            : lastWords(key),
      kind: held.kind,
      limits: held.limits,
    });
  }
  return parts;
}

/**
 * The part that a person names: by its key, or by the last words of it where they mean one part of this circuit.
 *
 * @param list  the circuit in which it is meant: `load` is a resistance, an inductance or a ratio as the load is
 * @throws InputError `no-part`, `no-scale`, `two-parts`, `not-in-circuit`
 */
export function chosenPart(written: string, list: CircuitList): ChosenPart {
  const name = plainWords(written.replace(/[-_]/g, ' ')).toLowerCase();
  const parts = scaleKeys();
  const wrong = (code: string, expected: string, hint?: string): InputError =>
    new InputError({
      code,
      where: 'PART',
      got: JSON.stringify(written),
      expected,
      ...(hint === undefined ? {} : { hint }),
    });
  const meant = name === 'load' ? `plate.load.${MAIN_VALUE[list.plate.load.kind]}`.toLowerCase() : name;
  const byKey = [...parts.values()].find((part) => part.key.toLowerCase() === meant);
  if (byKey) {
    if (isThere(byKey.key, list)) return byKey;
    throw wrong('not-in-circuit', 'a part of this circuit', `its load is of the kind ${list.plate.load.kind}`);
  }
  const byName = [...parts.values()].filter((part) => part.name.toLowerCase() === meant);
  const there = byName.filter((part) => isThere(part.key, list));
  // what stands in the plate's lead is meant before what lies behind it or is a tube's own
  const first = there.find((part) => part.key.startsWith('plate.') || part.key.startsWith('detector.')) ?? there[0];
  const rivals = there.filter((part) => section(part.key) === section(first?.key ?? ''));
  if (first && rivals.length === 1) return first;
  if (first) throw wrong('two-parts', `one of ${listed(there.map((part) => part.key))}`, 'give the whole key');
  if (byName.length > 0) {
    throw wrong('not-in-circuit', 'a part of this circuit', `${byName[0]?.key} needs such a part in the list first`);
  }
  const word = [...CHANGEABLE.keys()].find(
    (key) => key.toLowerCase() === name || lastWords(key).toLowerCase() === name,
  );
  if (word) throw wrong('no-scale', ACCEPTED, `${word} has no value that could be searched on a scale of ratios`);
  const near = nearestName(name, [...USUAL_PARTS, ...parts.keys()]);
  throw wrong('no-part', ACCEPTED, near === null ? undefined : `nearest: ${near}`);
}

/**
 * What stands for a part: what the list says, or the value that the circuit has where the list leaves it open; base SI
 * units. Null where there is none.
 */
export function standingValue(list: CircuitList, circuit: DetectorCircuit, key: string): number | null {
  let at: unknown = list;
  for (const part of key.split('.')) at = typeof at === 'object' && at !== null ? Reflect.get(at, part) : undefined;
  if (typeof at === 'number') return at;
  const { load } = circuit.plate;
  const { tunedCircuit: tuned, output } = circuit;
  const open: Readonly<Record<string, number | null | undefined>> = {
    'tuned circuit.coil': tuned.kind === 'coil' ? tuned.coilHenries : null,
    'tuned circuit.unloaded Q': tuned.kind === 'coil' ? tuned.unloadedQ : null,
    'tuned circuit.tap': tuned.kind === 'coil' ? tuned.tap : null,
    'plate.load.inductance': 'henries' in load ? load.henries : null,
    'plate.load.dc resistance': 'dcOhms' in load ? load.dcOhms : null,
    'plate.load.ratio': 'ratio' in load ? load.ratio : null,
    'plate.load.primary inductance': 'ratio' in load ? load.primaryHenries : null,
    'plate.load.leakage': 'ratio' in load ? load.leakageHenries : null,
    'output.load resistance': output.loadOhms,
    'output.load capacitance': output.loadFarads,
    'output.matching.ratio': output.matching?.ratio,
    'output.matching.primary inductance': output.matching?.primaryHenries,
  };
  return open[key] ?? null;
}

/** Ranges in which parts are sold or found, base SI units: common practice, no source. */
const BENCH: Readonly<Partial<Record<QuantityKind, readonly [number, number]>>> = {
  capacitance: [1e-12, 1e-6],
  resistance: [1e3, 100e6],
};

/** Decades to each side of the standing value that are searched at least. */
const DECADES_ABOUT = 1.5;
const DECADES_ABOUT_OTHERS = 2;

/**
 * The range in which a value is searched: where such parts are sold, wider about what stands on the list, and never
 * outside what the list accepts.
 */
export function searchRange(
  part: ChosenPart,
  standing: number | null,
): Required<Pick<QuantityRange, 'atLeast' | 'atMost'>> {
  const { atLeast, above, atMost } = part.limits;
  const bench = BENCH[part.kind];
  const about = 10 ** (bench ? DECADES_ABOUT : DECADES_ABOUT_OTHERS);
  const middle = standing !== null && standing > 0 ? standing : null;
  const most = atMost ?? Number.MAX_VALUE;
  const floor = atLeast ?? above ?? 0;
  const least = floor > 0 ? floor : most * 1e-9;
  const low = Math.min(bench?.[0] ?? middle ?? least, middle === null ? Number.MAX_VALUE : middle / about);
  const high = Math.max(bench?.[1] ?? middle ?? most, middle === null ? 0 : middle * about);
  return { atLeast: Math.min(Math.max(low, least), most), atMost: Math.max(Math.min(high, most), least) };
}

function lastWords(key: string): string {
  return key.slice(key.lastIndexOf('.') + 1);
}

function section(key: string): string {
  return key.slice(0, Math.max(key.indexOf('.'), 0));
}

/** Whether a load of this kind, or a matching transformer, is there for the key to belong to. */
function isThere(key: string, list: CircuitList): boolean {
  if (key.startsWith('output.matching.')) return list.output.matching !== undefined;
  if (!key.startsWith('plate.load.')) return true;
  return LOAD_KEYS[list.plate.load.kind].includes(lastWords(key));
}
