import type { Fault } from '../engine/errors.ts';
import { nearestName } from '../engine/parts/nearest-name.ts';
import { splitTolerance } from '../engine/parts/tolerance.ts';
import { AIR_LINES } from './air-lines.ts';
import type { Written } from './fields.ts';
import { type Tolerances, withoutTolerances } from './part-tolerances.ts';
import { LOAD_EXPECTED, loadMapping, matchingMapping } from './plate-load.ts';
import { type CircuitList, circuitList } from './schema.ts';
import { READING_KEYS, ROW_KEYS } from './tube-section.ts';
import type { WrittenEntry, WrittenKeys, WrittenValue } from './written-list.ts';
import type { Place } from './yaml-text.ts';

/** Keys that may hold on one line what they hold as a mapping. */
const ON_ONE_LINE: Readonly<Record<string, typeof loadMapping>> = {
  ...Object.fromEntries(AIR_LINES),
  'plate.load': loadMapping,
  'output.matching': matchingMapping,
};

/** One layer of changes: those later in the row stand over the earlier ones. */
export interface Layer {
  readonly keys: WrittenKeys;
  /** Flag that gave it, where it did not come from the list. */
  readonly flag?: string;
}

interface Laid extends WrittenEntry {
  readonly flag?: string;
}

export type LaidResult =
  | { readonly list: CircuitList; readonly tolerances: Tolerances; readonly places: ReadonlyMap<string, Laid> }
  | { readonly faults: readonly Fault[] };

/** Lays changes over one another and reads the values. Faults carry the place of the layer that is wrong. */
export function readLayers(layers: readonly Layer[]): LaidResult {
  const laid = new Map<string, Laid>();
  const faults: Fault[] = [];
  for (const { keys, flag } of layers) {
    clearFor(laid, keys);
    for (const [key, entry] of keys) lay(laid, key, { ...entry, ...(flag === undefined ? {} : { flag }) }, faults);
  }
  if (faults.length > 0) return { faults };
  const { values, tolerances, faults: ofTolerances } = withoutTolerances(laid);
  const parsed = circuitList.safeParse(nested(values));
  if (parsed.success && ofTolerances.length === 0) return { list: parsed.data, tolerances, places: laid };
  // a value behind which the tolerance is wrong is told of once
  const told = new Set(ofTolerances.map((fault) => fault.where));
  const issues = parsed.success ? [] : parsed.error.issues.filter((issue) => !told.has(issue.path.join('.')));
  return {
    faults: [
      ...ofTolerances.map((fault) => placed(fault, laid)),
      ...issues.flatMap((issue): Fault[] => {
        const path = issue.path.map(String);
        const key = path.join('.');
        const stated = issue.code === 'custom' ? (issue.params?.fault as Fault | undefined) : undefined;
        if (stated) return [placed({ ...stated, where: key }, laid)];
        if (issue.code === 'unrecognized_keys') {
          return issue.keys.map((extra) => placed(unknownKey(path, extra), laid));
        }
        const got = shortly(laid.get(key)?.value);
        return [placed({ code: 'wrong-value', where: key, got, expected: issue.message }, laid)];
      }),
    ],
  };
}

/** A key that a row, or the load of that kind, does not have. */
function unknownKey(path: readonly string[], extra: string): Fault {
  const where = [...path, extra].join('.');
  if (path.at(-1) === 'load') return { code: 'unknown-key', where, got: extra, expected: 'a key of this kind of load' };
  const known = path.includes('readings') ? READING_KEYS : ROW_KEYS;
  const near = nearestName(extra, known);
  const hint = near === null ? {} : { hint: `nearest: ${near}` };
  return { code: 'unknown-key', where, got: extra || 'no key', expected: `one of ${known.join(', ')}`, ...hint };
}

/** Adds the place of a key, or of the nearest part of it that was written. */
export function placed(fault: Fault, laid: ReadonlyMap<string, Laid>): Fault {
  for (let key = fault.where; key !== ''; key = key.slice(0, Math.max(key.lastIndexOf('.'), 0))) {
    const entry = laid.get(key);
    if (entry?.flag !== undefined) return { ...fault, where: entry.flag };
    const ofKey = fault.code === 'unknown-key' ? entry?.deepPlaces?.keys.get(fault.where) : undefined;
    const place = ofKey ?? deepestPlace(entry, fault.where, key) ?? entry?.place;
    if (place && place.line > 0) return { ...fault, line: place.line, column: place.column };
  }
  return fault;
}

/** The place of the longest part of `where` that was written below an entry. */
function deepestPlace(entry: Laid | undefined, where: string, key: string): Place | undefined {
  for (let part = where; part.length > key.length; part = part.slice(0, Math.max(part.lastIndexOf('.'), 0))) {
    const place = entry?.deepPlaces?.values.get(part);
    if (place) return place;
  }
  return undefined;
}

function lay(laid: Map<string, Laid>, key: string, entry: Laid, faults: Fault[]): void {
  const expand = ON_ONE_LINE[key];
  if (expand) {
    const { value } = entry;
    const mapping =
      typeof value === 'object'
        ? { fault: { code: 'unknown-load', where: key, got: shortly(value), expected: LOAD_EXPECTED } }
        : expandWithTolerance(expand, value);
    if ('fault' in mapping) {
      faults.push(placed({ ...(mapping.fault as Fault), where: key }, new Map([[key, entry]])));
      return;
    }
    laid.set(key, entry);
    for (const [name, written] of Object.entries(mapping)) laid.set(`${key}.${name}`, { ...entry, value: written });
    return;
  }
  laid.set(key, entry);
}

/** A tolerance behind a load on one line is that of its value. */
function expandWithTolerance(expand: typeof loadMapping, value: Written): ReturnType<typeof loadMapping> {
  const reading = splitTolerance(String(value));
  if ('fault' in reading || reading.tolerance === null) return expand(value);
  const mapping = expand(reading.value);
  if ('fault' in mapping) return mapping;
  return Object.fromEntries(
    Object.entries(mapping).map(([name, written]) => [
      name,
      name === 'kind' ? written : `${written} ${reading.written}`,
    ]),
  );
}

/** Values of an earlier layer that mean nothing once this one stands over it: a load is swapped whole, and so is a coil. */
function clearFor(laid: Map<string, Laid>, keys: WrittenKeys): void {
  const kind = keys.get('plate.load.kind');
  if (keys.has('plate.load') || (kind && kind.value !== laid.get('plate.load.kind')?.value)) drop(laid, 'plate.load.');
  if (keys.has('output.matching')) drop(laid, 'output.matching.');
  const tuned = (name: string): string => `tuned circuit.${name}`;
  const own = ['coil', 'capacitor', 'unloaded Q', 'tap'].map(tuned);
  if (keys.has(tuned('loaded Q'))) for (const key of own) laid.delete(key);
  if (own.some((key) => keys.has(key))) laid.delete(tuned('loaded Q'));
  if (keys.has(tuned('coil'))) laid.delete(tuned('capacitor'));
  if (keys.has(tuned('capacitor'))) laid.delete(tuned('coil'));
}

function drop(laid: Map<string, Laid>, prefix: string): void {
  for (const key of [...laid.keys()]) if (key.startsWith(prefix)) laid.delete(key);
}

function nested(values: ReadonlyMap<string, WrittenValue>): Record<string, unknown> {
  const root: Record<string, unknown> = {};
  for (const [key, value] of values) {
    if (ON_ONE_LINE[key]) continue;
    const path = key.split('.');
    const last = path.pop() as string;
    let at = root;
    for (const part of path) {
      at[part] ??= {};
      at = at[part] as Record<string, unknown>;
    }
    at[last] = value;
  }
  const plate = root.plate as { load?: Record<string, unknown> } | undefined;
  if (plate?.load) plate.load = { kind: 'resistor', ...plate.load };
  return root;
}

function shortly(value: WrittenValue | undefined): string {
  const text = value === undefined ? 'nothing' : typeof value === 'object' ? JSON.stringify(value) : String(value);
  return text.length > 60 ? `${text.slice(0, 57)}...` : text;
}
