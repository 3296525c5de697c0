import { CHOKES, LOW_IMPEDANCE_EARPIECE, PHONES, TRANSFORMERS } from '../../src/engine/circuits/catalogue-loads.ts';
import type {
  ChokeLoad,
  DetectorCircuit,
  Output,
  PhonesLoad,
  Plate,
  PlateLoad,
  TransformerLoad,
} from '../../src/engine/circuits/circuit.ts';

function named<Load>(parts: readonly { readonly name: string; readonly load: Load }[], name: string): Load {
  const found = parts.find((part) => part.name === name);
  if (!found) throw new Error(`no ${name} in the catalogue`);
  return found.load;
}

/** Loads of the catalogue by their names. */
export const choke = (name: 'large' | 'small'): ChokeLoad => named(CHOKES, name);
export const transformer = (name: 'good 1:3' | 'plain 1:3' | 'early 1:5'): TransformerLoad => named(TRANSFORMERS, name);
export const phones = (name: '2000 ohm' | '4000 ohm'): PhonesLoad => named(PHONES, name);
export const earpiece: PhonesLoad = LOW_IMPEDANCE_EARPIECE.load;

/** A matching transformer down from a plate of some ten kilohms: few turns, little capacitance, no direct current. */
export function matching(ratio: number): TransformerLoad {
  return {
    kind: 'transformer',
    ratio,
    primaryHenries: 30,
    primaryDcOhms: 900,
    leakageHenries: 0.06,
    coreLossOhms: 150e3,
    primaryFarads: 100e-12,
    secondaryDcOhms: 900 * ratio * ratio,
    secondaryFarads: 50e-12,
    falling: null,
  };
}

export const NEXT_GRID: Output = { couplingFarads: 10e-9, loadOhms: 1e6, loadFarads: 80e-12 };

/**
 * A circuit with another plate load and what belongs to it. A transformer feeds a grid straight from its secondary,
 * phones in the plate lead feed nothing.
 */
export function loaded(
  circuit: DetectorCircuit,
  load: PlateLoad,
  changes: { readonly plate?: Partial<Plate>; readonly output?: Partial<Output> } = {},
): DetectorCircuit {
  const output: Output =
    load.kind === 'phones'
      ? { couplingFarads: null, loadOhms: null, loadFarads: 0 }
      : load.kind === 'transformer'
        ? { ...NEXT_GRID, couplingFarads: null }
        : NEXT_GRID;
  return {
    ...circuit,
    plate: { ...circuit.plate, load, ...changes.plate },
    output: { ...output, ...changes.output },
  };
}
