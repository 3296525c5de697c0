import type { DetectorCircuit } from '../circuits/circuit.ts';
import { ratioDecibels } from '../circuits/response.ts';
import { InputError } from '../errors.ts';
import { THIRD_OCTAVE_NOMINAL_HERTZ } from '../parts/third-octaves.ts';
import type { Tolerance } from '../parts/tolerance.ts';
import { type CircuitFigures, type CircuitOutcome, succeeded } from './circuit-figures.ts';
import { endFactors, JOINT_CORNERS, type JointCorner, jointFactors, type PartEnds, partEnds } from './corner-cases.ts';
import { drawnShares, factorsAt, type Shares } from './draws.ts';
import { type PartsAge, type TolerancedPart, tolerancedParts } from './part-tolerances.ts';
import { type Distribution, distributionOf } from './statistics.ts';
import { type VarianceShares, varianceShares } from './variance-shares.ts';

/** Frequency at which parts are compared, Hz: where speech turns dull first. */
export const TREBLE_HERTZ = 5000;
const TREBLE = THIRD_OCTAVE_NOMINAL_HERTZ.indexOf(TREBLE_HERTZ);

export const trebleDecibels = (figures: CircuitFigures): number => figures.decibels[TREBLE] as number;

/** What is to be spread: a circuit, its tolerances, how many random circuits and which. */
export interface SpreadRequest {
  readonly circuit: DetectorCircuit;
  /** By dotted key, as the list states them. */
  readonly stated: Readonly<Record<string, Tolerance>>;
  readonly age: PartsAge;
  readonly seed: number;
  readonly runs: number;
}

/** The circuits of a spread, as factors on its parts. */
export interface SpreadPlan {
  readonly request: SpreadRequest;
  readonly parts: readonly TolerancedPart[];
  readonly shares: Shares;
  /** Each part at both ends, then the random circuits. */
  readonly factors: readonly (readonly number[])[];
}

/** One figure over the circuits. */
export interface SpreadFigure extends Distribution {
  readonly nominal: number;
}

export interface Spread {
  readonly parts: readonly TolerancedPart[];
  readonly nominal: CircuitFigures;
  /** Random circuits that came to be, and how many did not, by the code of what was wrong. */
  readonly circuits: number;
  readonly failed: Readonly<Record<string, number>>;
  readonly response: readonly (SpreadFigure & { readonly hertz: number })[];
  readonly levelVoltsRms: SpreadFigure;
  /** −∞ where the response does not fall that far down to 1 Hz. */
  readonly lowCornerHertz: SpreadFigure;
  /** Infinite where the response does not fall that far up to 16 kHz. */
  readonly highCornerHertz: SpreadFigure;
  readonly plateVolts: SpreadFigure;
  readonly loadedQ: SpreadFigure;
  readonly secondPercent: SpreadFigure;
  /** Shares of the variance, both in decibels; null where there is none or too few circuits to tell. */
  readonly trebleShares: VarianceShares | null;
  readonly levelShares: VarianceShares | null;
  readonly ends: readonly PartEnds[];
  readonly joint: Readonly<
    Record<JointCorner, { readonly factors: readonly number[]; readonly outcome: CircuitOutcome }>
  >;
}

export function planSpread(request: SpreadRequest): SpreadPlan {
  const parts = tolerancedParts(request.circuit, request.stated, request.age);
  const shares = drawnShares(parts, request.seed, request.runs);
  return { request, parts, shares, factors: [...endFactors(parts), ...shares.map((row) => factorsAt(parts, row))] };
}

/** The joint corners, once each part's ends are known: in the order of `JOINT_CORNERS`. */
export function planCorners(
  plan: SpreadPlan,
  nominal: CircuitFigures,
  outcomes: readonly CircuitOutcome[],
): number[][] {
  const ends = partEnds(outcomes.slice(0, 2 * plan.parts.length));
  const treble = jointFactors(plan.parts, ends, nominal, trebleDecibels);
  const level = jointFactors(plan.parts, ends, nominal, (figures) => figures.levelVoltsRms);
  return [treble.lowest, treble.highest, level.lowest, level.highest];
}

/**
 * Puts the circuits of a plan together.
 *
 * @param outcomes  of `plan.factors`
 * @param corners   factors and outcomes of `planCorners`
 * Raises InputError `no-circuit` where not one random circuit comes to rest.
 */
export function gatherSpread(
  plan: SpreadPlan,
  nominal: CircuitFigures,
  outcomes: readonly CircuitOutcome[],
  corners: { readonly factors: readonly (readonly number[])[]; readonly outcomes: readonly CircuitOutcome[] },
): Spread {
  const { parts } = plan;
  const random = outcomes.slice(2 * parts.length);
  const came = random.flatMap((outcome, run) =>
    succeeded(outcome) ? [{ figures: outcome, row: plan.shares[run] as readonly number[] }] : [],
  );
  const failed = countedFailures(random);
  if (came.length === 0) {
    throw new InputError({
      code: 'no-circuit',
      where: 'tolerances',
      got: `${random.length} random circuits of which none comes to rest (${Object.keys(failed).join(', ')})`,
      expected: 'closer tolerances, or a circuit with more room',
    });
  }
  const over = (figure: (figures: CircuitFigures) => number): SpreadFigure => ({
    nominal: figure(nominal),
    ...distributionOf(came.map(({ figures }) => figure(figures))),
  });
  const rows = came.map(({ row }) => row);
  const level = (figures: CircuitFigures): number => ratioDecibels(figures.levelVoltsRms, nominal.levelVoltsRms);
  const sharesOf = (figure: (figures: CircuitFigures) => number): VarianceShares | null =>
    varianceShares(
      rows,
      came.map(({ figures }) => figure(figures)),
    );
  return {
    parts,
    nominal,
    circuits: came.length,
    failed,
    response: THIRD_OCTAVE_NOMINAL_HERTZ.map((hertz, k) => ({
      hertz,
      ...over((figures) => figures.decibels[k] as number),
    })),
    levelVoltsRms: over((figures) => figures.levelVoltsRms),
    lowCornerHertz: over((figures) => figures.lowCornerHertz ?? Number.NEGATIVE_INFINITY),
    highCornerHertz: over((figures) => figures.highCornerHertz ?? Number.POSITIVE_INFINITY),
    plateVolts: over((figures) => figures.plateVolts),
    loadedQ: over((figures) => figures.loadedQ),
    secondPercent: over((figures) => figures.secondPercent),
    trebleShares: sharesOf(trebleDecibels),
    levelShares: sharesOf(level),
    ends: partEnds(outcomes.slice(0, 2 * parts.length)),
    joint: Object.fromEntries(
      JOINT_CORNERS.map((corner, k) => [
        corner,
        { factors: corners.factors[k] as readonly number[], outcome: corners.outcomes[k] as CircuitOutcome },
      ]),
    ) as Spread['joint'],
  };
}

function countedFailures(outcomes: readonly CircuitOutcome[]): Record<string, number> {
  const counts: Record<string, number> = {};
  for (const outcome of outcomes) {
    if (!succeeded(outcome)) counts[outcome.failed] = (counts[outcome.failed] ?? 0) + 1;
  }
  return counts;
}
