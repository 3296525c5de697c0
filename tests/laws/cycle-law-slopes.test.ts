import { describe, expect, it } from 'vitest';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import {
  CHORD,
  CHORD_BY_A,
  CHORD_BY_X,
  type CycleLaw,
  directAverage,
  linearRectifierCycleLaw,
  MEAN,
  MEAN_BY_A,
  MEAN_BY_X,
  squareCycleLaw,
  straightCycleLaw,
} from '../../src/engine/tubes/cycle-average.ts';
import { softKneeLaw } from '../../src/engine/tubes/smooth-law.ts';
import { listVariants } from '../../src/list/variants.ts';

const LAWS: readonly (readonly [string, CycleLaw])[] = [
  ['a soft knee, averaged directly', directAverage(softKneeLaw(6e-4, 7.5, 1.5))],
  ['the textbook rectifier', linearRectifierCycleLaw(250)],
  ['the textbook square law', squareCycleLaw(-0.3, 1e-6, 4e-6, 1e-5)],
  ['a straight law', straightCycleLaw(-0.3, 3e-4, 7e-4)],
];
/** Mean volts and carrier's peak: cut off in part, about even, and conducting for most of the cycle. */
const STATES = [
  [-1.7, 2.45],
  [-2, 2.1],
  [-0.2, 1.4],
  [0.5, 2],
  [0.5, 0.3],
] as const;
const STEP_VOLTS = 1e-5;

describe.each(LAWS)('%s', (_, law) => {
  it.each(STATES)('at %d V with %d V of carrier: slopes are those of central differences', (x, a) => {
    const at = (dx: number, da: number): Float64Array => {
      const out = new Float64Array(10);
      law.average(x + dx, a + da, out);
      return out;
    };
    const here = at(0, 0);
    for (const [value, byX, byA] of [
      [MEAN, MEAN_BY_X, MEAN_BY_A],
      [CHORD, CHORD_BY_X, CHORD_BY_A],
    ] as const) {
      const slope = (up: Float64Array, down: Float64Array): number => (up[value]! - down[value]!) / (2 * STEP_VOLTS);
      // of the law's largest conductance: central differences over 10 µV leave 1e-9 of curvature, and 1e-11 of rounding
      const scale = 1e-7 * Math.max(Math.abs(here[MEAN_BY_X]!), Math.abs(here[CHORD]!));
      expect(Math.abs(here[byX]! - slope(at(STEP_VOLTS, 0), at(-STEP_VOLTS, 0)))).toBeLessThan(scale);
      expect(Math.abs(here[byA]! - slope(at(0, STEP_VOLTS), at(0, -STEP_VOLTS)))).toBeLessThan(scale);
    }
  });
});

describe('the textbook rectifier in a circuit', () => {
  it.each(['0.5 V', '1 V', '2 V', '5 V'])('comes to rest with a power leak at %s', (level) => {
    const text = `tuned circuit: { loaded Q: 20 }\nstation: { level: ${level} }\ndetector: { law: linear, leak: 250k }`;
    const rest = restPoint(listVariants(text, 'set.yaml')[0]!.circuit);
    // a rectifier of a thousandth of its load stands within a tenth of the carrier's peak at the grid
    expect(-rest.gridVolts / rest.currents.gridCarrierPeak).toBeGreaterThan(0.9);
  });
});
