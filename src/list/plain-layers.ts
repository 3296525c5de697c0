import { InputError } from '../engine/errors.ts';
import { type BuiltCircuit, buildCircuit } from './build-circuit.ts';
import { readLayers } from './layers.ts';
import type { WrittenKeys, WrittenValue } from './written-list.ts';

/** Dotted keys of a parts list with their values as written, as plain data: no places. */
export type PlainKeys = Readonly<Record<string, WrittenValue>>;

const NO_PLACE = { line: 0, column: 0 } as const;

/** Written keys without their places. */
export function plainKeys(keys: WrittenKeys): PlainKeys {
  return Object.fromEntries([...keys].map(([key, { value }]) => [key, value]));
}

/**
 * The circuit of plain layers, later ones over earlier ones, by the same reading as a list's.
 *
 * @throws InputError with every fault found; faults name keys, not places
 */
export function circuitOfLayers(layers: readonly PlainKeys[]): BuiltCircuit {
  const read = readLayers(
    layers.map((keys) => ({
      keys: new Map(Object.entries(keys).map(([key, value]) => [key, { value, place: NO_PLACE }])),
    })),
  );
  if ('faults' in read) throw new InputError(read.faults);
  return buildCircuit(read.list);
}
