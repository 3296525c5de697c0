import { harmonicPercent, TEST_MODULATION } from '../circuits/analysis.ts';
import type { DetectorCircuit } from '../circuits/circuit.ts';
import { magnitude } from '../circuits/complex.ts';
import { corners, LinearResponse, REFERENCE_HERTZ, ratioDecibels } from '../circuits/response.ts';
import { restPoint } from '../circuits/rest-point.ts';
import { SURVEYED, steadyTone } from '../circuits/steady-state.ts';
import { InputError } from '../errors.ts';
import { THIRD_OCTAVE_NOMINAL_HERTZ } from '../parts/third-octaves.ts';
import { withFactors } from './off-nominal.ts';
import type { VariedPart } from './varied-parts.ts';

/** Modulation at which the second harmonic is quoted. */
export const HARMONIC_MODULATION = 0.8;

/** What a spread looks at of one circuit: plain numbers, so that they travel between threads. */
export interface CircuitFigures {
  /** dB re the circuit's own 400 Hz, at the ISO 266 third octaves. */
  readonly decibels: readonly number[];
  /** 400 Hz at 30 % modulation, V rms, in proportion to a small modulation. */
  readonly levelVoltsRms: number;
  /** Half-power corners re 400 Hz; null: not reached between 1 Hz and 16 kHz. */
  readonly lowCornerHertz: number | null;
  readonly highCornerHertz: number | null;
  /** 0 for a diode or crystal, which has none. */
  readonly plateVolts: number;
  readonly loadedQ: number;
  /** Of 400 Hz at 80 % modulation. */
  readonly secondPercent: number;
}

/** A circuit that cannot be: why, by the code of its fault. */
export interface FailedCircuit {
  readonly failed: string;
}

export type CircuitOutcome = CircuitFigures | FailedCircuit;

export function succeeded(outcome: CircuitOutcome): outcome is CircuitFigures {
  return !('failed' in outcome);
}

/** The figures of one circuit. Raises InputError as `restPoint` and `steadyTone` do. */
export function circuitFigures(circuit: DetectorCircuit): CircuitFigures {
  const rest = restPoint(circuit);
  const response = new LinearResponse(rest);
  const reference = magnitude(response.at(REFERENCE_HERTZ).output);
  const { lowHertz, highHertz } = corners(response);
  return {
    decibels: THIRD_OCTAVE_NOMINAL_HERTZ.map((hertz) => ratioDecibels(magnitude(response.at(hertz).output), reference)),
    levelVoltsRms: (reference * TEST_MODULATION) / Math.SQRT2,
    lowCornerHertz: lowHertz,
    highCornerHertz: highHertz,
    plateVolts: circuit.detector.diode ? 0 : rest.plateVolts,
    loadedQ: rest.tuned.loadedQ,
    secondPercent: harmonicPercent(steadyTone(rest, REFERENCE_HERTZ, HARMONIC_MODULATION, SURVEYED), 2),
  };
}

/** The figures of a circuit with its parts off their values, or why there is no such circuit. */
export function figuresWith(
  circuit: DetectorCircuit,
  parts: readonly VariedPart[],
  factors: readonly number[],
): CircuitOutcome {
  try {
    return circuitFigures(withFactors(circuit, parts, factors));
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    return { failed: error.faults[0]?.code ?? 'unknown' };
  }
}
