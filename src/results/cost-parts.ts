import type { CostRow } from './result.ts';

/** The parts whose cost is listed, as they are called in tables and plots. */
export const COST_PARTS: readonly { readonly key: keyof CostRow; readonly name: string }[] = [
  { key: 'tunedCircuit', name: 'tuned circuit' },
  { key: 'gridCapacitor', name: 'grid capacitor' },
  { key: 'plateBypass', name: 'plate bypass' },
  { key: 'load', name: 'load and coupling' },
];
