import type { Fault } from '../engine/errors.ts';
import type { QuantityKind } from '../engine/parts/format-quantity.ts';
import { splitTolerance, type Tolerance } from '../engine/parts/tolerance.ts';
import { unitDescription } from '../engine/parts/units.ts';
import { VARIED_PARTS } from '../engine/spread/varied-parts.ts';
import { unwrapped } from './dotted-keys.ts';
import { quantityKinds } from './fields.ts';
import { CHANGEABLE } from './schema.ts';
import type { WrittenEntry, WrittenValue } from './written-list.ts';

/** Tolerances by the dotted key of their part. */
export type Tolerances = Readonly<Record<string, Tolerance>>;

const TUBE = 'detector.tube';

/**
 * Takes the tolerances off the values of a list, so that everything else reads the nominal ones. A tolerance behind
 * something that is no part, or that no spread varies, is a fault: it would be passed over silently.
 */
export function withoutTolerances<Entry extends WrittenEntry>(
  laid: ReadonlyMap<string, Entry>,
): { readonly values: Map<string, WrittenValue>; readonly tolerances: Tolerances; readonly faults: readonly Fault[] } {
  const values = new Map<string, WrittenValue>();
  const tolerances: Record<string, Tolerance> = {};
  const faults: Fault[] = [];
  for (const [key, { value }] of laid) {
    const reading = typeof value === 'string' ? splitTolerance(value) : null;
    const varies = VARIED_PARTS.some((part) => part.key === key);
    values.set(key, value);
    if (reading === null || (!varies && !isQuantity(key))) continue;
    if ('fault' in reading) {
      // a builder's own tube may have any name
      if (varies && key !== TUBE) faults.push({ ...reading.fault, where: key });
    } else if (reading.tolerance !== null) {
      if (!varies) faults.push(noTolerance(key, value));
      tolerances[key] = reading.tolerance;
      values.set(key, reading.value);
    }
  }
  return { values, tolerances, faults };
}

function kindOf(key: string): QuantityKind | undefined {
  const field = CHANGEABLE.get(key);
  return field && (quantityKinds.get(field) ?? quantityKinds.get(unwrapped(field)))?.kind;
}

function isQuantity(key: string): boolean {
  const kind = kindOf(key);
  return kind !== undefined && kind !== 'fraction';
}

function noTolerance(key: string, value: WrittenValue): Fault {
  const noun = unitDescription(kindOf(key) ?? 'number').noun;
  const hint = 'tolerances belong to parts: capacitors, resistors, coils, the tube, the supply';
  return { code: 'no-tolerance', where: key, got: String(value), expected: `${noun} without a tolerance`, hint };
}
