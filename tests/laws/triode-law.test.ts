import { describe, expect, it } from 'vitest';
import { lawFromCurvePoints } from '../../src/engine/tubes/curve-fitting.ts';
import { lawFromRow, nearestRow } from '../../src/engine/tubes/fitting.ts';
import { gridLawFromZeroCurrent } from '../../src/engine/tubes/grid-law.ts';
import {
  cathodeAmps,
  cathodeDerivatives,
  gridAmps,
  gridDerivatives,
  plateAmps,
  plateKnee,
  plateKneeSlope,
  softplusPower,
  softplusPowerValue,
  triodePoint,
} from '../../src/engine/tubes/laws.ts';
import type { TubeLaw } from '../../src/engine/tubes/tube.ts';

const LAW: TubeLaw = { G: 7.3e-4, C: 3.5, gamma: 1.5, mu: 70, phi: 0.6, ...gridLawFromZeroCurrent(10e-6, 0.0905) };

/** Fourth-order central difference: error h⁴/30 of the fifth derivative and 1e-16/h of rounding. */
function difference(f: (x: number) => number, x: number, h: number): number {
  return (8 * (f(x + h) - f(x - h)) - (f(x + 2 * h) - f(x - 2 * h))) / (12 * h);
}

describe('softplus power law', () => {
  const out = new Float64Array(3);
  const shapes: readonly [number, number][] = [
    [3.5, 1.5],
    [7.4, 1.5],
    [9.9, 1.314],
    [3.4, 1.26],
    [2, 2.2],
  ];

  // 1e-9: with h = 2e-3/sharpness the difference is good to 1e-11 of the slope, and rounding to 1e-13/2e-3
  it.each(shapes)(
    'sharpness %d, exponent %d: slope and curvature agree with differences from -30 to +30 e-folds',
    (c, g) => {
      const second = new Float64Array(3);
      for (let z = -30; z <= 30; z += 0.37) {
        const x = z / c;
        const h = 2e-3 / c;
        softplusPower(1e-3, c, g, x, out);
        const slope = difference((v) => softplusPowerValue(1e-3, c, g, v), x, h);
        const curvature = difference(
          (v) => {
            softplusPower(1e-3, c, g, v, second);
            return second[1]!;
          },
          x,
          h,
        );
        expect(Math.abs(slope / out[1]! - 1)).toBeLessThan(1e-9);
        expect(Math.abs(curvature - out[2]!)).toBeLessThan(1e-9 * (Math.abs(out[2]!) + c * out[1]!));
        expect(softplusPowerValue(1e-3, c, g, x)).toBe(out[0]);
      }
    },
  );

  // 1e-12: the argument of the exponential is rounded to 1e-16 of up to 400
  it.each(shapes)('sharpness %d, exponent %d: the tail is an exponential in value, slope and curvature', (c, g) => {
    for (const z of [-40, -100, -250, -400]) {
      softplusPower(2e-3, c, g, z / c, out);
      const tail = (2e-3 * Math.exp(g * z)) / c ** g;
      if (tail < 1e-290) continue;
      for (const [k, wanted] of [tail, tail * g * c, tail * (g * c) ** 2].entries()) {
        expect(Math.abs(out[k]! / wanted - 1)).toBeLessThan(1e-12);
      }
    }
  });

  it('neither overflows nor turns into no number, however large the voltage', () => {
    for (const x of [-1e300, -1e6, -800, -220, -213, -200, 0, 200, 1e6, 1e150]) {
      softplusPower(1e-3, 3.5, 1.5, x, out);
      for (const value of out) {
        expect(Number.isFinite(value)).toBe(true);
        expect(value).toBeGreaterThanOrEqual(0);
      }
    }
    softplusPower(1e-3, 3.5, 1.5, 1e6, out);
    // exact power far above the knee, to the rounding of one square root
    expect(Math.abs(out[0]! / 1e6 - 1)).toBeLessThan(1e-14);
  });
});

describe('triode law', () => {
  it('has the slopes of its currents: mu is exactly the ratio of the two where knee and grid are out of play', () => {
    for (const [vg, vp] of [
      [-2, 250],
      [-0.3, 45],
      [-0.5, 20],
      [-0.1, 3],
      [0.2, 90],
    ] as const) {
      const point = triodePoint(LAW, vg, vp);
      expect(point.plateAmps).toBe(plateAmps(LAW, vg, vp));
      // 1e-7: fourth-order difference at h = 1 mV of a law whose shortest scale is 60 mV, so (1/60)⁴/30 and less
      expect(Math.abs(difference((v) => plateAmps(LAW, v, vp), vg, 1e-3) / point.siemens - 1)).toBeLessThan(1e-7);
      expect(Math.abs(difference((v) => plateAmps(LAW, vg, v), vp, 1e-2) / point.plateSiemens - 1)).toBeLessThan(1e-7);
    }
    const clear = triodePoint(LAW, -2, 250);
    expect(Math.abs(clear.siemens / clear.plateSiemens / LAW.mu - 1)).toBeLessThan(1e-9);
  });

  it('has a knee of 0 at and below zero, 0.3 % short of 1 at 5 V, and its own slope', () => {
    expect(plateKnee(-3)).toBe(0);
    expect(plateKnee(0)).toBe(0);
    expect(plateKneeSlope(-1e-9)).toBe(0);
    expect(plateKneeSlope(0)).toBe(1 / 1.5);
    // 0.25 %: "0.3 % at 5 V" to one digit
    expect(Math.abs(1 - plateKnee(5) - 0.0025)).toBeLessThan(0.0005);
    for (const v of [0.1, 0.8, 1.5, 4, 12]) {
      // 1e-9: as above, absolute because the slope itself dies out
      expect(Math.abs(difference(plateKnee, v, 1e-3) - plateKneeSlope(v))).toBeLessThan(1e-9);
    }
    expect(plateKneeSlope(5000)).toBe(0);
  });

  it('gives the same currents by the short and the long call', () => {
    const out = new Float64Array(3);
    for (const v of [-3, -0.4, 0, 0.7, 12]) {
      cathodeDerivatives(LAW, v, out);
      expect(cathodeAmps(LAW, v)).toBe(out[0]);
      gridDerivatives(LAW, v, out);
      expect(gridAmps(LAW, v)).toBe(out[0]);
    }
  });
});

describe('fitting', () => {
  const row = { plateVolts: 250, gridVolts: -2, plateAmps: 2.3e-3, mu: 70, siemens: 1600e-6, plateOhms: 44000 };
  const grid = { Gg: LAW.Gg, Cg: LAW.Cg, xi: LAW.xi };

  it('finds the law again from a row that the law made', () => {
    const point = triodePoint(LAW, -0.2, 6);
    const made = { ...row, gridVolts: -0.2, plateVolts: 6, plateAmps: point.plateAmps, siemens: point.siemens };
    const law = lawFromRow(made, grid);
    // 1e-12: one root to 1e-15, knee and grid current both in play at this point
    expect(Math.abs(law.phi - LAW.phi)).toBeLessThan(1e-12);
    expect(Math.abs(law.G / LAW.G - 1)).toBeLessThan(1e-11);
  });

  it('refuses a row that no such law can meet', () => {
    expect(() => lawFromRow({ ...row, siemens: 16e-3 }, grid)).toThrow('row-too-steep');
    expect(() => lawFromRow({ ...row, plateAmps: 0 }, grid)).toThrow('row-not-positive');
    expect(() => lawFromRow({ ...row, gridVolts: Number.NaN }, grid)).toThrow('row-not-positive');
  });

  it('picks the row nearest the supply, and of two the lower plate, then the grid nearer zero', () => {
    const at = (plateVolts: number, gridVolts: number) => ({ ...row, plateVolts, gridVolts });
    expect(nearestRow([at(100, -1), at(250, -2)], 90).plateVolts).toBe(100);
    expect(nearestRow([at(100, -1), at(250, -2)], 200).plateVolts).toBe(250);
    expect(nearestRow([at(250, -2), at(100, -1)], 175).plateVolts).toBe(100);
    expect(nearestRow([at(90, -3), at(90, 0)], 90).gridVolts).toBe(0);
  });

  it('finds exponent, knee, perveance and contact potential again from points that a law made', () => {
    const truth: TubeLaw = { ...LAW, gamma: 1.37, C: 2.6, phi: 0.71, G: 9.1e-4 };
    const points = [-4, -3, -2, -1, 0].flatMap((gridVolts) =>
      [40, 100, 160, 220, 280].map((plateVolts) => ({
        gridVolts,
        plateVolts,
        plateAmps: plateAmps(truth, gridVolts, plateVolts),
      })),
    );
    const { law, freed, iterations } = lawFromCurvePoints(points, LAW);
    expect(freed).toHaveLength(4);
    expect(iterations).toBeLessThan(40);
    // 1e-5: the valley is nearly flat along exponent and perveance, and the search stops at 1e-12 of the sum
    for (const key of ['gamma', 'C', 'phi', 'G'] as const)
      expect(Math.abs(law[key] / truth[key] - 1)).toBeLessThan(1e-5);
  });

  it('holds exponent and knee when there are only three points, and says what it freed', () => {
    const points = [90, 150, 250].map((plateVolts) => ({
      gridVolts: -1,
      plateVolts,
      plateAmps: plateAmps(LAW, -1, plateVolts) * 1.1,
    }));
    const { law, freed } = lawFromCurvePoints(points, LAW);
    expect(freed).toEqual(['G', 'phi']);
    expect(law.gamma).toBe(1.5);
    expect(law.C).toBe(3.5);
  });

  it.each([
    ['one point', [{ gridVolts: 0, plateVolts: 100, plateAmps: 1e-3 }], 'too-few-points'],
    ['no current at all', [0, 1, 2].map((k) => ({ gridVolts: -k, plateVolts: 100, plateAmps: 0 })), 'point-not-valid'],
    [
      'a negative plate',
      [50, -50].map((plateVolts) => ({ gridVolts: 0, plateVolts, plateAmps: 1e-3 })),
      'point-not-valid',
    ],
    [
      'points that contradict each other',
      [1, 1, 1, 1].map((_, k) => ({ gridVolts: 0, plateVolts: 100 + k, plateAmps: k % 2 === 0 ? 1e-3 : 9e-3 })),
      'curve-points-undetermined',
    ],
  ])('refuses %s', (_, points, code) => {
    expect(() => lawFromCurvePoints(points, LAW)).toThrow(code);
  });
});
