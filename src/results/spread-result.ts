import { ratioDecibels } from '../engine/circuits/response.ts';
import type { RestPoint } from '../engine/circuits/rest-point.ts';
import { type CircuitFigures, type CircuitOutcome, succeeded } from '../engine/spread/circuit-figures.ts';
import type { JointCorner } from '../engine/spread/corner-cases.ts';
import type { PartsAge } from '../engine/spread/part-tolerances.ts';
import { type Spread, type SpreadFigure, trebleDecibels } from '../engine/spread/spread.ts';
import type { CircuitRecord } from './result.ts';
import { circuitRecord } from './variant-result.ts';

/** The shape of spread.json. Keys carry their units; numbers are base SI units unless the key says otherwise. */
export interface SpreadResult {
  readonly format: 'presolder-spread/1';
  /** Random circuits drawn for each variant, and the seed that fixes them. */
  readonly runs: number;
  readonly seed: number;
  readonly parts: PartsAge;
  readonly variants: readonly SpreadVariant[];
}

export interface SpreadVariant {
  readonly name: string;
  readonly changes: Readonly<Record<string, string>>;
  /** The nominal circuit. */
  readonly circuit: CircuitRecord;
  readonly parts: readonly SpreadPart[];
  /** Random circuits that came to rest; those that did not, counted by what was wrong. */
  readonly circuits: number;
  readonly failed: Readonly<Record<string, number>>;
  readonly response: readonly (FigureRecord & { readonly hertz: number })[];
  readonly levelVoltsRmsAt30Percent: FigureRecord;
  readonly lowCornerHertz: FigureRecord;
  readonly highCornerHertz: FigureRecord;
  readonly plateVolts: FigureRecord;
  readonly loadedQ: FigureRecord;
  /** Of 400 Hz at 80 % modulation. */
  readonly secondPercent: FigureRecord;
  /** What no part carries by itself, of the variances whose shares stand with the parts; null with those. */
  readonly shareTogether: { readonly fiveKilohertz: number | null; readonly level: number | null };
  readonly corners: Readonly<Record<JointCorner, CornerRecord>>;
  readonly cautions: readonly string[];
}

export interface SpreadPart {
  readonly key: string;
  readonly name: string;
  readonly kind: string;
  /** Base SI units; a tube: 1. */
  readonly nominal: number;
  readonly least: number;
  readonly most: number;
  /** Drawn evenly in value, or in ratio. */
  readonly evenIn: 'value' | 'ratio';
  /** Whether the list states the tolerance, or the kind of part gives it. */
  readonly stated: boolean;
  /** Share of the variance that the part carries by itself, 0 to 1. */
  readonly share: { readonly fiveKilohertz: number | null; readonly level: number | null };
  /** This part at an end, all others nominal. */
  readonly atLeast: OneCircuit;
  readonly atMost: OneCircuit;
}

/** A figure over the random circuits; null where it was not reached (a corner). */
export interface FigureRecord {
  readonly nominal: number | null;
  readonly mean: number | null;
  readonly least: number | null;
  readonly low5: number | null;
  readonly median: number | null;
  readonly high95: number | null;
  readonly most: number | null;
}

/** A single circuit's figures, or why there is no such circuit. */
export type OneCircuit =
  | {
      readonly fiveKilohertzDecibels: number;
      readonly levelVoltsRmsAt30Percent: number;
      /** Re the nominal circuit. */
      readonly levelDecibels: number;
      readonly lowCornerHertz: number | null;
      readonly highCornerHertz: number | null;
      readonly plateVolts: number;
      readonly loadedQ: number;
      readonly secondPercent: number;
    }
  | { readonly failed: string };

export interface CornerRecord {
  /** Values of all parts, by key, in the order of the parts. */
  readonly values: Readonly<Record<string, number>>;
  readonly figures: OneCircuit;
}

/** One variant of a spread result. */
export function spreadVariant(
  name: string,
  changes: Readonly<Record<string, string>>,
  rest: RestPoint,
  spread: Spread,
  cautions: readonly string[],
): SpreadVariant {
  const { nominal } = spread;
  const parts = spread.parts.map((part, k): SpreadPart => {
    const { low, high } = spread.ends[k] as (typeof spread.ends)[number];
    return {
      key: part.key,
      name: part.name,
      kind: part.kind,
      nominal: part.nominal,
      least: part.nominal * part.tolerance.least,
      most: part.nominal * part.tolerance.most,
      evenIn: part.tolerance.evenIn,
      stated: part.stated,
      share: {
        fiveKilohertz: spread.trebleShares?.shares[k] ?? null,
        level: spread.levelShares?.shares[k] ?? null,
      },
      atLeast: oneCircuit(low, nominal),
      atMost: oneCircuit(high, nominal),
    };
  });
  const corners = Object.entries(spread.joint).map(([corner, { factors, outcome }]): [string, CornerRecord] => [
    corner,
    {
      values: Object.fromEntries(spread.parts.map((part, k) => [part.key, part.nominal * (factors[k] as number)])),
      figures: oneCircuit(outcome, nominal),
    },
  ]);
  return {
    name,
    changes,
    circuit: circuitRecord(rest),
    parts,
    circuits: spread.circuits,
    failed: spread.failed,
    response: spread.response.map(({ hertz, ...figure }) => ({ hertz, ...figureRecord(figure) })),
    levelVoltsRmsAt30Percent: figureRecord(spread.levelVoltsRms),
    lowCornerHertz: figureRecord(spread.lowCornerHertz),
    highCornerHertz: figureRecord(spread.highCornerHertz),
    plateVolts: figureRecord(spread.plateVolts),
    loadedQ: figureRecord(spread.loadedQ),
    secondPercent: figureRecord(spread.secondPercent),
    shareTogether: {
      fiveKilohertz: spread.trebleShares?.together ?? null,
      level: spread.levelShares?.together ?? null,
    },
    corners: Object.fromEntries(corners) as SpreadVariant['corners'],
    cautions,
  };
}

/** JSON has no infinite numbers: a corner that was not reached is null there. */
function figureRecord(figure: SpreadFigure): FigureRecord {
  const shown = (value: number | null): number | null => (value === null || !Number.isFinite(value) ? null : value);
  return {
    nominal: shown(figure.nominal),
    mean: shown(figure.mean),
    least: shown(figure.least),
    low5: shown(figure.low5),
    median: shown(figure.median),
    high95: shown(figure.high95),
    most: shown(figure.most),
  };
}

function oneCircuit(outcome: CircuitOutcome, nominal: CircuitFigures): OneCircuit {
  if (!succeeded(outcome)) return { failed: outcome.failed };
  return {
    fiveKilohertzDecibels: trebleDecibels(outcome),
    levelVoltsRmsAt30Percent: outcome.levelVoltsRms,
    levelDecibels: ratioDecibels(outcome.levelVoltsRms, nominal.levelVoltsRms),
    lowCornerHertz: outcome.lowCornerHertz,
    highCornerHertz: outcome.highCornerHertz,
    plateVolts: outcome.plateVolts,
    loadedQ: outcome.loadedQ,
    secondPercent: outcome.secondPercent,
  };
}
