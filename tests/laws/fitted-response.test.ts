import { describe, expect, it } from 'vitest';
import { CircuitFigures } from '../../src/engine/choosing/figures.ts';
import { studentQuantile, studentWithin } from '../../src/engine/choosing/student.ts';
import { fitOf, fittedCases } from './fitted-cases.ts';
import { gridLeak, stiff } from './grid-leak-circuit.ts';

const HERTZ = [30, 60, 100, 200, 400, 800, 1500, 2500, 4000, 6000, 9000, 14_000];
const circuitAt = ([farads, ohms]: readonly number[]) =>
  gridLeak({
    plateOhms: 220e3,
    loadOhms: 1e6,
    tunedCircuit: stiff(30),
    bypassFarads: farads as number,
    leakOhms: ohms as number,
  });

describe('values fitted to a measured response', () => {
  it('are the true ones where there is no noise, whatever the level', () => {
    const figures = new CircuitFigures(circuitAt([680e-12, 3.3e6]));
    const decibels = HERTZ.map((hertz) => figures.decibels(hertz) - 17);
    const fit = fitOf({ hertz: HERTZ, decibels, readings: HERTZ.map(() => 1) }, circuitAt);
    // steps end at 1e-6 of the logarithm or below
    expect((fit.parts[0]?.value as number) / 680e-12).toBeCloseTo(1, 4);
    expect((fit.parts[1]?.value as number) / 3.3e6).toBeCloseTo(1, 4);
    expect(fit.rmsDecibels).toBeLessThan(1e-4);
    expect(fit.degrees).toBe(HERTZ.length - 3);
  });

  it('hold the true values in their intervals, which are no wider than they must be', () => {
    // the hundred cases of this, with a coil too, run with the long tests; 95 % falls short of 13 in 16 once in 140
    const { within, medianWidth } = fittedCases(7, 16, stiff(30));
    for (const count of within) expect(count).toBeGreaterThanOrEqual(13);
    // Student's t for 26 degrees is 1.05 of the normal's 1.96; the rest is chance and bends of the valley
    for (const width of medianWidth) {
      expect(width).toBeLessThan(1.3);
      expect(width).toBeGreaterThan(0.8);
    }
  });

  it('a part that shapes nothing is said to be not told', () => {
    // a coupling capacitor of 10 µF and more shows at no reading
    const coupled = ([farads]: readonly number[]) =>
      gridLeak({ plateOhms: 220e3, loadOhms: 1e6, tunedCircuit: stiff(30), couplingFarads: (farads as number) * 1e5 });
    const figures = new CircuitFigures(coupled([220e-12]));
    const decibels = HERTZ.map((hertz, k) => figures.decibels(hertz) + (k % 2 === 0 ? 0.1 : -0.1));
    const fit = fitOf({ hertz: HERTZ, decibels, readings: HERTZ.map(() => 1) }, ([farads]) =>
      coupled([farads as number]),
    );
    // the leak is not in the circuit at all
    expect(fit.parts[1]).toMatchObject({ low: 0, high: Number.POSITIVE_INFINITY });
  });
});

describe("Student's t", () => {
  // Abramowitz and Stegun, Handbook of Mathematical Functions, 1964, table 26.10, two-sided 0.95 (from memory, printed to
  // three decimals)
  it.each([
    [1, 12.706],
    [2, 4.303],
    [5, 2.571],
    [10, 2.228],
    [26, 2.056],
    [30, 2.042],
    [120, 1.98],
  ])('of %i degrees', (degrees, t) => {
    expect(studentQuantile(0.95, degrees)).toBeCloseTo(t, 3);
    expect(studentWithin(studentQuantile(0.95, degrees), degrees)).toBeCloseTo(0.95, 9);
  });

  it('of many degrees is normal', () => {
    // 95 % of a normal number lies within 1.95996 (Abramowitz and Stegun, table 26.5, from memory)
    expect(studentQuantile(0.95, 100_000)).toBeCloseTo(1.95996, 4);
  });
});
