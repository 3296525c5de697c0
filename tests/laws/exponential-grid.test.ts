import { createRequire } from 'node:module';
import { describe, expect, it } from 'vitest';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { magnitude } from '../../src/engine/circuits/complex.ts';
import { LinearResponse } from '../../src/engine/circuits/response.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { CHORD, directAverage, MEAN } from '../../src/engine/tubes/cycle-average.ts';
import { exponentialLaw } from '../../src/engine/tubes/smooth-law.ts';
import { BESSEL_ROWS } from './bessel-rows.ts';
import { gridLeak, stiff } from './grid-leak-circuit.ts';

/** Modified Bessel functions, the first also times exp(-x); the package's module form comes without types. */
const { i0, i0e, i1 } = createRequire(import.meta.url)('cephes') as Record<'i0' | 'i0e' | 'i1', (x: number) => number>;

/** kT/e at 1000 K, V, as the worked figures below have it. */
const THERMAL = 0.08617;

/** Mean current (A) and fundamental per volt of carrier (S) of an exponential grid of 20 µA at 0 V. */
function averages(x: number, a: number): { mean: number; chord: number } {
  const out = new Float64Array(6);
  directAverage(exponentialLaw(20e-6, THERMAL)).average(x, a, out);
  return { mean: out[MEAN]!, chord: out[CHORD]! };
}

/** Voltage at which a rising function passes zero, to the last digit. */
function crossing(rising: (volts: number) => number, low: number, high: number): number {
  let [below, above] = [low, high];
  for (let halving = 0; halving < 80; halving++) {
    const middle = 0.5 * (below + above);
    if (rising(middle) < 0) below = middle;
    else above = middle;
  }
  return 0.5 * (below + above);
}

describe('an exponential law over a carrier cycle', () => {
  // The mean of exp(x·cos) is the modified Bessel function I0 and its fundamental 2·I1: D. W. Knight, Diode detectors
  // for RF measurement, part 1, 2016, abstract (seen). I0 and I1 themselves from the Cephes library, good to 1e-15.
  it('averages to the modified Bessel functions I0 and I1', () => {
    for (const x of [1e-3, 0.1, 0.5, 1, 2, 5, 10, 20, 50, 100, 200]) {
      const { mean, chord } = averages(-0.4, x * THERMAL);
      const current = 20e-6 * Math.exp(-0.4 / THERMAL);
      // 1e-12: the exponential turns 1e-16 of its argument, 200 at most, into 2e-14, and some 150 terms are added
      expect(Math.abs(mean / (current * i0(x)) - 1), `I0(${x})`).toBeLessThan(1e-12);
      const fundamental = (2 * current * i1(x)) / (x * THERMAL);
      expect(Math.abs(chord / fundamental - 1), `I1(${x})`).toBeLessThan(1e-12);
    }
  });

  // ln I0 and I1/I0 as computed from their series; five or six figures are given, so 1e-5.
  it.each(BESSEL_ROWS)(
    'without a load the grid falls by V_T·ln I0: V/V_T = %d gives %d e-folds',
    (x, efolds, ratio) => {
      const quiet = averages(-0.35, 0).mean;
      const volts = crossing((v) => averages(v, x * THERMAL).mean - quiet, -0.35 - 2 * x * THERMAL, -0.35);
      expect(Math.abs((-0.35 - volts) / THERMAL - efolds)).toBeLessThan(1e-5);
      const { mean, chord } = averages(volts, x * THERMAL);
      expect(Math.abs((chord * x * THERMAL) / (2 * mean) - ratio)).toBeLessThan(1e-5);
    },
  );

  // The same law with a leak of 1 MΩ, from 20 µA·exp(v/V_T)·I0(V/V_T) = -v/R. Half of the last digit given; 0.5 % for
  // the input, given to three figures.
  it.each([
    [0.01, 0.00023, 247e3],
    [0.1, 0.02169, 270e3],
    [1, 0.71971, 489e3],
    [5, 4.51892, 518e3],
  ])('with 1 MΩ, %d V of carrier shift the grid by %d V and meet %d Ω', (peak, shift, inputOhms) => {
    const rest = (a: number): number => crossing((v) => averages(v, a).mean + v / 1e6, -10, 0);
    // -0.3489 V of rest, half of the last digit
    expect(Math.abs(rest(0) + 0.3489)).toBeLessThan(5e-5);
    expect(Math.abs(rest(0) - rest(peak) - shift)).toBeLessThan(5e-6);
    expect(Math.abs(1 / averages(rest(peak), peak).chord / inputOhms - 1)).toBeLessThan(5e-3);
  });
});

describe('a whole detector whose grid is exponential', () => {
  /**
   * A grid law of 1 A at 0 V carried down its tail: at a leak's microampere it rests more than a volt below zero, nine
   * and more times its knee, and is an exponential to 1e-4.
   */
  function exponentialDetector(peak: number, leakOhms: number): DetectorCircuit {
    const circuit = gridLeak({ tunedCircuit: stiff(0.5), levelVoltsRms: peak / Math.SQRT2, leakOhms });
    const Cg = 1 / (1.5 * THERMAL);
    const law = { ...circuit.tube.law, Gg: Cg ** 1.5, Cg, xi: 1.5 };
    return { ...circuit, tube: { ...circuit.tube, law } };
  }

  it.each([250e3, 1e6, 5e6])('%d Ω: the leak alone fixes the grid resistance, r_g/R = V_T/|v|', (leakOhms) => {
    const rest = restPoint(exponentialDetector(0, leakOhms));
    const gridOhms = 1 / rest.currents.heldGridByGrid;
    // 2e-4: the tail is an exponential to 1.5/4·exp(v·Cg), 5e-5 here
    expect(Math.abs(gridOhms / leakOhms / (THERMAL / -rest.gridVolts) - 1)).toBeLessThan(2e-4);
  });

  // Derived here: the mean current of weak carrier V grows by I·V²/(4·V_T²), r_g = V_T/I, and R shares it with r_g.
  it.each([250e3, 1e6, 5e6])('%d Ω: weak carrier shifts the grid by V²/(4·V_T)·R/(R + r_g)', (leakOhms) => {
    const quiet = restPoint(exponentialDetector(0, leakOhms));
    const gridOhms = 1 / quiet.currents.heldGridByGrid;
    const loud = restPoint(exponentialDetector(2e-3, leakOhms));
    const peak = loud.currents.gridCarrierPeak;
    const shift = (peak ** 2 / (4 * THERMAL)) * (leakOhms / (leakOhms + gridOhms));
    // 1e-3: the tail's own 2e-4, and a few times the next term, (V/V_T)²/16 or 3e-5
    expect(Math.abs((quiet.gridVolts - loud.gridVolts) / shift - 1)).toBeLessThan(1e-3);
    // modulation m moves V² by 2m: at an audio so low that no capacitor counts, the grid follows by twice the shift
    const grid = magnitude(new LinearResponse(loud).at(0.1).grid);
    expect(Math.abs(grid / (2 * shift) - 1)).toBeLessThan(1e-3);
  });

  it.each([0.1, 1, 5])('%d V of carrier rest where I0(V/V_T) puts the grid', (peak) => {
    const rest = restPoint(exponentialDetector(peak, 1e6));
    const a = rest.currents.gridCarrierPeak;
    // 1 A·exp(v/V_T)·I0(a/V_T) = -v/R, in logarithms because I0 of 58 is 1e24
    const x = a / THERMAL;
    const volts = crossing((v) => v / THERMAL + x + Math.log(i0e(x)) - Math.log(-v / 1e6), -10, -1e-3);
    // the crests of 5 V come within 0.8 V of the knee, where the soft law is 0.1 % short of its tail; twice that
    expect(Math.abs(rest.gridVolts - volts)).toBeLessThan(0.002 * THERMAL);
  });
});
