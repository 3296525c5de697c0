import { type CircuitFigures, type CircuitOutcome, succeeded } from './circuit-figures.ts';
import type { TolerancedPart } from './part-tolerances.ts';

/** All parts at once at the ends that lower or raise the treble, and the level. */
export const JOINT_CORNERS = ['dullest', 'brightest', 'weakest', 'loudest'] as const;
export type JointCorner = (typeof JOINT_CORNERS)[number];

/** One part at its ends, all others nominal. */
export interface PartEnds {
  readonly low: CircuitOutcome;
  readonly high: CircuitOutcome;
}

/** Rows of factors for the circuits with one part at its lower, then at its upper end. */
export function endFactors(parts: readonly TolerancedPart[]): number[][] {
  const nominal = parts.map(() => 1);
  return parts.flatMap(({ tolerance: { least, most } }, k) => [nominal.with(k, least), nominal.with(k, most)]);
}

/** Outcomes in the order of `endFactors`, part by part. */
export function partEnds(outcomes: readonly CircuitOutcome[]): PartEnds[] {
  return Array.from({ length: outcomes.length / 2 }, (_, k) => ({
    low: outcomes[2 * k] as CircuitOutcome,
    high: outcomes[2 * k + 1] as CircuitOutcome,
  }));
}

/**
 * Factors with all parts at once at those ends that, each by itself, lower a figure, and that raise it: the worst corners
 * as the signs of the sensitivities have them. An end whose circuit fails is taken as neither; a part that moves the
 * figure to one side only stays nominal in the other corner.
 */
export function jointFactors(
  parts: readonly TolerancedPart[],
  ends: readonly PartEnds[],
  nominal: CircuitFigures,
  figure: (figures: CircuitFigures) => number,
): { readonly lowest: number[]; readonly highest: number[] } {
  const middle = figure(nominal);
  const pick = (sign: 1 | -1): number[] =>
    parts.map(({ tolerance: { least, most } }, k) => {
      const { low, high } = ends[k] as PartEnds;
      const gain = (end: CircuitOutcome): number => (succeeded(end) ? sign * (figure(end) - middle) : -1);
      const [atLow, atHigh] = [gain(low), gain(high)];
      if (Math.max(atLow, atHigh) <= 0) return 1;
      return atLow > atHigh ? least : most;
    });
  return { lowest: pick(-1), highest: pick(1) };
}
