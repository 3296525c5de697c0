import { InputError } from '../engine/errors.ts';
import { type BuiltCircuit, buildCircuit } from './build-circuit.ts';
import { type Layer, placed, readLayers } from './layers.ts';
import type { CircuitList } from './schema.ts';
import { changesText, draftedVariants, type Setting } from './variants.ts';
import type { WrittenKeys } from './written-list.ts';

/** Values of parts by their dotted keys, base SI units. */
export type PartValues = ReadonlyMap<string, number>;

/** A variant of a list whose parts can be given other values. */
export interface AdjustableVariant {
  readonly name: string;
  readonly changes: Readonly<Record<string, string>>;
  /** The circuit as it is listed, every value read. */
  readonly list: CircuitList;
  /** The circuit with these values in place of the listed ones. Throws InputError where the list would refuse one. */
  readonly circuitWith: (values: PartValues) => BuiltCircuit;
}

/**
 * The variants of a list with the flags over it, as `listVariants` gives them, open to other values.
 *
 * @throws InputError as `listVariants` does
 */
export function adjustableVariants(
  text: string,
  fileName: string,
  settings: readonly Setting[] = [],
): AdjustableVariant[] {
  const { base, drafts, inFile } = draftedVariants(text, fileName, settings);
  return drafts.map((draft) => {
    const layers: readonly Layer[] = [{ keys: base }, ...draft.layers];
    const read = (values: PartValues): { list: CircuitList; built: BuiltCircuit } => {
      const keys: WrittenKeys = new Map(
        [...values].map(([key, value]) => [key, { value, place: { line: 0, column: 0 } }]),
      );
      const laid = readLayers(values.size === 0 ? layers : [...layers, { keys, flag: [...values.keys()].join(', ') }]);
      if ('faults' in laid) throw new InputError(laid.faults.map(inFile));
      try {
        return { list: laid.list, built: buildCircuit(laid.list) };
      } catch (error) {
        if (!(error instanceof InputError)) throw error;
        throw new InputError(error.faults.map((fault) => inFile(placed(fault, laid.places))));
      }
    };
    return {
      name: draft.name,
      changes: changesText(draft),
      list: read(new Map()).list,
      circuitWith: (values) => read(values).built,
    };
  });
}

/**
 * Variants that differ in nothing but the values to be chosen are one; of several alike the one that changes least
 * stands for them.
 *
 * @param values  any values of the parts to be chosen that the list accepts
 */
export function apartFrom(variants: readonly AdjustableVariant[], values: PartValues): AdjustableVariant[] {
  const kept = new Map<string, AdjustableVariant>();
  const changes = (variant: AdjustableVariant): number => Object.keys(variant.changes).length;
  for (const variant of variants) {
    const alike = JSON.stringify(variant.circuitWith(values).circuit);
    const other = kept.get(alike);
    if (!other || changes(variant) < changes(other)) kept.set(alike, variant);
  }
  return [...kept.values()];
}
