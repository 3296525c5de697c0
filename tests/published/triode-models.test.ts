import { describe, expect, it } from 'vitest';
import { cathodeAmps, controlVolts, gridAmps } from '../../src/engine/tubes/laws.ts';
import type { TubeLaw } from '../../src/engine/tubes/tube.ts';

// K. Dempwolf and U. Zölzer, "A physically-motivated triode model for circuit simulations", Proc. DAFx-11, Paris, 2011,
// parameter sets RSD-1 (seen in a public copy) and RSD-2 (from memory). Their constant Ig0 is no part of our law: it never turns off.
const RSD_1: TubeLaw = { G: 2.242e-3, mu: 103.2, gamma: 1.26, C: 3.4, phi: 0, Gg: 6.177e-4, xi: 1.314, Cg: 9.901 };
const RSD_1_CONSTANT = 8.025e-8;
const RSD_2: TubeLaw = { G: 2.173e-3, mu: 100.2, gamma: 1.28, C: 3.19, phi: 0, Gg: 5.911e-4, xi: 1.358, Cg: 11.76 };
const RSD_2_CONSTANT = 4.527e-8;

// Currents worked by hand from the printed equation and parameters; each is good to half of its last digit.
describe('the equation of Dempwolf and Zölzer with their own parameters', () => {
  it.each([
    ['RSD-1', RSD_1, 250, -2, 0.9014],
    ['RSD-1', RSD_1, 100, -1, 0.2744],
    ['RSD-2', RSD_2, 250, -2, 1.0198],
    ['RSD-2', RSD_2, 100, -1, 0.3061],
  ])('%s: cathode current', (_, law, plateVolts, gridVolts, milliamperes) => {
    const amps = cathodeAmps(law, controlVolts(law, gridVolts, plateVolts));
    expect(Math.abs(amps * 1e3 - milliamperes)).toBeLessThanOrEqual(0.5e-4);
  });

  it.each([
    ['RSD-1', RSD_1, RSD_1_CONSTANT, 0, 18.84, 0.005],
    ['RSD-1', RSD_1, RSD_1_CONSTANT, 0.5, 249, 0.5],
    ['RSD-1', RSD_1, RSD_1_CONSTANT, 1, 618, 0.5],
    ['RSD-2', RSD_2, RSD_2_CONSTANT, 0, 12.69, 0.005],
    ['RSD-2', RSD_2, RSD_2_CONSTANT, 0.5, 231, 0.5],
    ['RSD-2', RSD_2, RSD_2_CONSTANT, 1, 591, 0.5],
  ])('%s: grid current', (_, law, constant, gridVolts, microamperes, halfDigit) => {
    expect(Math.abs((gridAmps(law, gridVolts) + constant) * 1e6 - microamperes)).toBeLessThanOrEqual(halfDigit);
  });

  // half of the last digit, 0.05 mV; at -2 V the law is within 1e-8 of its tail
  it.each([
    ['RSD-1', RSD_1, 76.9],
    ['RSD-2', RSD_2, 62.6],
  ])('%s: e-fold of the grid current below zero', (_, law, millivolts) => {
    const eFold = 1e-3 / Math.log(gridAmps(law, -2) / gridAmps(law, -2.001));
    expect(Math.abs(eFold * 1e3 - millivolts)).toBeLessThan(0.05);
  });
});
