import { InputError } from '../engine/errors.ts';
import { EXACT } from '../engine/parts/tolerance.ts';
import { readLayers } from './layers.ts';
import type { Tolerances } from './part-tolerances.ts';
import type { WrittenValue } from './written-list.ts';

const LEAK = 'detector.leak';
const LEAKAGE = 'detector.grid capacitor leakage';
const GRID_CURRENT = 'tube.grid current.at zero volts';
const NO_PLACE = { line: 0, column: 0 } as const;

/**
 * The tolerances that a variant's layers state. The leakage of a grid capacitor that stands in for a leak is the leak; a
 * grid current that was read or stated is known, unless a tolerance is written behind it.
 *
 * @param layers  as `ListedVariant` has them
 * @throws InputError for layers that no circuit could be built of
 */
export function statedTolerances(layers: readonly Readonly<Record<string, WrittenValue>>[]): Tolerances {
  const read = readLayers(
    layers.map((keys) => ({
      keys: new Map(Object.entries(keys).map(([key, value]) => [key, { value, place: NO_PLACE }])),
    })),
  );
  if ('faults' in read) throw new InputError(read.faults);
  const { list, tolerances } = read;
  const stated = { ...tolerances };
  if (list.detector.leak === null && stated[LEAKAGE]) stated[LEAK] = stated[LEAKAGE];
  const grid = list.tube['grid current'];
  if (grid.readings || grid['at zero volts'] !== undefined) stated[GRID_CURRENT] ??= EXACT;
  return stated;
}
