import { CircuitFigures } from '../../src/engine/choosing/figures.ts';
import { type Fit, fitResponse, type Measurement } from '../../src/engine/choosing/fit-response.ts';
import type { DetectorCircuit, TunedCircuit } from '../../src/engine/circuits/circuit.ts';
import { LinearResponse } from '../../src/engine/circuits/response.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { THIRD_OCTAVE_NOMINAL_HERTZ } from '../../src/engine/parts/third-octaves.ts';
import { gridLeak } from './grid-leak-circuit.ts';
import { overDecades, seededNumbers } from './seeded-numbers.ts';

/** Noise of a reading at a bench, dB rms. */
export const NOISE_DECIBELS = 0.2;
const HERTZ = THIRD_OCTAVE_NOMINAL_HERTZ;
/** What the list says; the true values lie up to ten times from it. */
const LISTED = [220e-12, 2.2e6] as const;

type Pair = readonly [number, number];

/** What one hundred fits, or fewer, come to. */
export interface FitSummary {
  /** Fits in which the true value lies within its stated interval, of the bypass and of the leak. */
  readonly within: Pair;
  /** Median of the stated interval's width over the least that any unbiased method can have. */
  readonly medianWidth: Pair;
}

/**
 * Measures seeded circuits with noise and fits bypass and leak to each. The least width is that of the Cramér-Rao bound,
 * 2 · 1.96 · σ · √(JᵀJ)⁻¹ with the level free: J are the slopes at the true values, taken here afresh.
 */
export function fittedCases(seed: number, count: number, tunedCircuit: TunedCircuit): FitSummary {
  const next = seededNumbers(seed);
  const within = [0, 0] as [number, number];
  const widths: [number[], number[]] = [[], []];
  for (let n = 0; n < count; n++) {
    const truth = [overDecades(next(), 50e-12, 2e-9), overDecades(next(), 500e3, 5e6)] as const;
    const circuitAt = ([farads, ohms]: readonly number[]): DetectorCircuit =>
      gridLeak({
        plateOhms: 220e3,
        loadOhms: 1e6,
        tunedCircuit,
        bypassFarads: farads as number,
        leakOhms: ohms as number,
      });
    const figures = new CircuitFigures(circuitAt(truth));
    const measurement: Measurement = {
      hertz: HERTZ,
      decibels: HERTZ.map((hertz) => figures.decibels(hertz) + NOISE_DECIBELS * normal(next)),
      readings: HERTZ.map(() => 1),
    };
    const fit = fitOf(measurement, circuitAt);
    const least = leastWidths(truth, circuitAt);
    fit.parts.forEach((part, k) => {
      if (part.low <= (truth[k] as number) && (truth[k] as number) <= part.high) within[k as 0 | 1]++;
      widths[k as 0 | 1].push(Math.log(part.high / part.low) / (least[k] as number));
    });
  }
  return { within, medianWidth: [median(widths[0]), median(widths[1])] };
}

/** Fits bypass and leak to a measurement. */
export function fitOf(measurement: Measurement, circuitAt: (values: readonly number[]) => DetectorCircuit): Fit {
  const search = fitResponse({
    measurement,
    parts: [
      { low: 1e-12, high: 1e-6, standing: LISTED[0] },
      { low: 1e3, high: 1e8, standing: LISTED[1] },
    ],
    circuitAt,
  });
  for (;;) {
    const step = search.next();
    if (!step.done) continue;
    if (step.value === null) throw new Error('the circuit comes to rest at no value');
    return step.value;
  }
}

/** Least widths of 95 % intervals of the logarithms of two values. */
function leastWidths(truth: Pair, circuitAt: (values: readonly number[]) => DetectorCircuit): Pair {
  const shape = (values: Pair): number[] => {
    const response = new LinearResponse(restPoint(circuitAt(values)));
    const levels = HERTZ.map((hertz) => response.decibels(hertz));
    const mean = levels.reduce((sum, level) => sum + level, 0) / levels.length;
    return levels.map((level) => level - mean);
  };
  const slope = (k: 0 | 1): number[] => {
    const step = 1e-4;
    const moved = (by: number): number[] => shape([truth[0] * (k === 0 ? by : 1), truth[1] * (k === 1 ? by : 1)]);
    const [above, below] = [moved(Math.exp(step)), moved(Math.exp(-step))];
    return above.map((level, r) => (level - (below[r] as number)) / (2 * step));
  };
  const [a, b] = [slope(0), slope(1)];
  const dot = (x: readonly number[], y: readonly number[]): number =>
    x.reduce((sum, value, r) => sum + value * (y[r] as number), 0);
  const determinant = dot(a, a) * dot(b, b) - dot(a, b) ** 2;
  const width = (other: readonly number[]): number =>
    2 * 1.96 * NOISE_DECIBELS * Math.sqrt(dot(other, other) / determinant);
  return [width(b), width(a)];
}

/** A normal number: Box and Muller, Ann. Math. Stat. 29, 1958 (from memory). */
function normal(next: () => number): number {
  return Math.sqrt(-2 * Math.log(1 - next())) * Math.cos(2 * Math.PI * next());
}

function median(values: readonly number[]): number {
  return [...values].sort((a, b) => a - b)[values.length >> 1] as number;
}
