import { SeededNumbers } from '../chance/seeded-numbers.ts';
import { factorAt, type TolerancedPart } from './part-tolerances.ts';
import { VARIED_PARTS } from './varied-parts.ts';

/** Where each part stands in its tolerance, 0 at the lower end to 1 at the upper, one row a circuit. */
export type Shares = readonly (readonly number[])[];

/**
 * Random circuits: every part by itself, evenly within its tolerance (in value, or in ratio where that is how it is
 * known). Run `r` of a seed is the same circuit for any number of runs, and a part's draws are the same whichever of the
 * others vary.
 */
export function drawnShares(parts: readonly TolerancedPart[], seed: number, runs: number): Shares {
  const places = parts.map((part) => VARIED_PARTS.findIndex((one) => one.key === part.key));
  return Array.from({ length: runs }, (_, run) => {
    const numbers = SeededNumbers.ofRun(seed, run);
    const all = VARIED_PARTS.map(() => numbers.share());
    return places.map((place) => all[place] as number);
  });
}

/** Factors on the nominal values for a row of shares. */
export function factorsAt(parts: readonly TolerancedPart[], shares: readonly number[]): number[] {
  return parts.map(({ tolerance }, k) => factorAt(tolerance, shares[k] as number));
}
