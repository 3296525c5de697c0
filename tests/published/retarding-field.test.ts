import { describe, expect, it } from 'vitest';
import { gridLawFromReadings, gridLawFromZeroCurrent } from '../../src/engine/tubes/grid-law.ts';
import { gridAmps } from '../../src/engine/tubes/laws.ts';
import { thermalVolts } from '../../src/engine/tubes/thermal-voltage.ts';

// kT/e with the exact constants of the SI of 2019; temperatures of cathodes: Terman, Radio Engineers' Handbook, 1943, section 4
// (from memory). Half of the last digit.
describe('retarding field', () => {
  it.each([
    [1000, 86.17, 198.4],
    [1050, 90.48, 208.3],
    [1100, 94.79, 218.3],
    [1900, 163.73, 377.0],
    [2400, 206.82, 476.2],
    [2500, 215.43, 496.1],
  ])('%d K: %d mV, %d mV a decade', (kelvin, millivolts, perDecade) => {
    expect(Math.abs(thermalVolts(kelvin) * 1e3 - millivolts)).toBeLessThanOrEqual(0.005);
    // half of the last digit, 0.05 mV
    expect(Math.abs(thermalVolts(kelvin) * 1e3 * Math.LN10 - perDecade)).toBeLessThanOrEqual(0.05);
  });

  const law = (amps: number, volts: number) => ({
    G: 0,
    C: 1,
    gamma: 1.5,
    mu: 2,
    phi: 0,
    ...gridLawFromZeroCurrent(amps, volts),
  });

  it('gives the stated current at zero volts', () => {
    // 1e-14: a power and a logarithm of doubles
    expect(Math.abs(gridAmps(law(10e-6, 0.0905), 0) / 10e-6 - 1)).toBeLessThan(1e-14);
  });

  it('falls e-fold in kT/e far below zero', () => {
    const slope = Math.log(gridAmps(law(10e-6, 0.0905), -3) / gridAmps(law(10e-6, 0.0905), -3.0905));
    // 1e-9: the law nears its tail as exp(z)/4 of itself, and z is -22 here
    expect(Math.abs(slope - 1)).toBeLessThan(1e-9);
  });

  // Rest of a purely exponential grid with a leak to the cathode, V_T 86.17 mV, worked by hand from I0·exp(v/V_T) = -v/R.
  // Near zero our law is softer than that exponential, so what is put to the test here is its tail, carried up to v.
  it.each([
    [5e-6, 0.5e6, -0.2124],
    [5e-6, 1e6, -0.2561],
    [5e-6, 2e6, -0.3017],
    [20e-6, 0.5e6, -0.3017],
    [20e-6, 1e6, -0.3489],
    [20e-6, 2e6, -0.3974],
  ])('the tail of the law rests as an exponential of %d A does with %d Ω: %d V', (amps, leakOhms, volts) => {
    const thermal = thermalVolts(1000);
    let low = -2;
    let high = 0;
    for (let i = 0; i < 60; i++) {
      const v = (low + high) / 2;
      // 5 V further down the law is its tail to 1e-17; the ratio to -5 V is the exponential at v
      const tail = gridAmps(law(1e-6, thermal), v - 5) * Math.exp(5 / thermal);
      const perAmp = gridAmps(law(1e-6, thermal), -5) * Math.exp(5 / thermal);
      if ((amps * tail) / perAmp < -v / leakOhms) low = v;
      else high = v;
    }
    // half of the last digit, plus 1e-5 of rounding in the tail
    expect(Math.abs(low - volts)).toBeLessThan(0.0001);
  });
});

describe('grid law from two readings of the free grid', () => {
  const wanted = gridLawFromZeroCurrent(8e-6, 0.093);
  const law = { G: 0, C: 1, gamma: 1.5, mu: 2, phi: 0, ...wanted };
  const reading = (leakOhms: number, returnVolts: number) => {
    let low = -5;
    let high = returnVolts;
    for (let i = 0; i < 80; i++) {
      const v = (low + high) / 2;
      if (gridAmps(law, v) < (returnVolts - v) / leakOhms) low = v;
      else high = v;
    }
    return { gridVolts: low, leakOhms, returnVolts };
  };

  it.each([
    [10e6, 0, 470e3, 0],
    [2.2e6, 2, 220e3, 0],
    [100e3, 1.4, 1e6, 0],
  ])('finds the law again from leaks of %d Ω (to %d V) and %d Ω (to %d V)', (r1, v1, r2, v2) => {
    const found = gridLawFromReadings([reading(r1, v1), reading(r2, v2)]);
    // 1e-8: readings good to 1e-15 V over a Δv of 0.1 V and more, an exponent of 10 to 100 per volt
    expect(Math.abs(found.Cg / wanted.Cg - 1)).toBeLessThan(1e-8);
    expect(Math.abs(found.Gg / wanted.Gg - 1)).toBeLessThan(1e-8);
  });

  it.each([
    [
      'a grid above its return',
      { gridVolts: 0.2, leakOhms: 1e6 },
      { gridVolts: -0.3, leakOhms: 2e6 },
      'grid-reading-not-positive',
    ],
    ['no leak', { gridVolts: -0.2, leakOhms: 0 }, { gridVolts: -0.3, leakOhms: 2e6 }, 'grid-reading-not-positive'],
    [
      'one reading twice',
      { gridVolts: -0.3, leakOhms: 1e6 },
      { gridVolts: -0.3, leakOhms: 1e6 },
      'grid-readings-alike',
    ],
    [
      'more current at the more negative grid',
      { gridVolts: -0.3, leakOhms: 1e6 },
      { gridVolts: -0.5, leakOhms: 1e5 },
      'grid-readings-contradict',
    ],
    [
      'a current that hardly rises',
      { gridVolts: -0.3, leakOhms: 1e6 },
      { gridVolts: -0.9, leakOhms: 3e6 },
      'grid-readings-contradict',
    ],
  ])('refuses %s', (_, one, two, code) => {
    expect(() => gridLawFromReadings([one, two])).toThrow(code);
  });
});
