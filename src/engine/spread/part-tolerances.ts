import type { DetectorCircuit } from '../circuits/circuit.ts';
import { EXACT, type Tolerance, withinFactor, withinFractions } from '../parts/tolerance.ts';
import { nominalValue } from './off-nominal.ts';
import { type PartFamily, VARIED_PARTS, type VariedPart } from './varied-parts.ts';

/** What the set is built of where the list does not say. */
export type PartsAge = 'old' | 'new';

/**
 * Tolerances by kind of part: common practice, no source.
 *
 * Old: mica capacitors as they were sold, carbon resistors that have drifted upwards. New: film. A tube's current and
 * slope rise and fall together within the limits of the trade; its grid current is known by its order of magnitude only.
 */
const BY_FAMILY: Readonly<Record<PartsAge, Readonly<Record<Exclude<PartFamily, null>, Tolerance>>>> = {
  old: {
    capacitor: withinFractions(0.1, 0.1),
    resistor: withinFractions(0.1, 0.3),
    tube: withinFractions(0.25, 0.25),
    'grid current': withinFactor(3),
  },
  new: {
    capacitor: withinFractions(0.05, 0.05),
    resistor: withinFractions(0.05, 0.05),
    tube: withinFractions(0.25, 0.25),
    'grid current': withinFactor(3),
  },
};

/** A part that varies in one spread, with how far and why. */
export interface TolerancedPart extends VariedPart {
  /** Base SI units; a tube: 1. */
  readonly nominal: number;
  readonly tolerance: Tolerance;
  /** Whether the list states the tolerance, or the kind of part gives it. */
  readonly stated: boolean;
}

/**
 * The parts of a circuit that vary.
 *
 * @param stated  tolerances by dotted key as the list states them; they stand before those of the kind of part
 */
export function tolerancedParts(
  circuit: DetectorCircuit,
  stated: Readonly<Record<string, Tolerance>>,
  age: PartsAge,
): TolerancedPart[] {
  return VARIED_PARTS.flatMap((part) => {
    const nominal = nominalValue(circuit, part);
    const own = Object.hasOwn(stated, part.key) ? stated[part.key] : undefined;
    const tolerance = own ?? (part.family === null ? EXACT : BY_FAMILY[age][part.family]);
    if (nominal === null || tolerance.least === tolerance.most) return [];
    return [{ ...part, nominal, tolerance, stated: own !== undefined }];
  });
}

/** The factor on a part's value for a share from 0 to 1 of the way through its tolerance. */
export function factorAt({ least, most, evenIn }: Tolerance, share: number): number {
  return evenIn === 'ratio' ? least * (most / least) ** share : least + (most - least) * share;
}
