import { describe, expect, it } from 'vitest';
import { lawFromCurvePoints } from '../../src/engine/tubes/curve-fitting.ts';
import { plateAmps } from '../../src/engine/tubes/laws.ts';
import { SOCKET_STRAYS, tubeFromCatalogue } from '../../src/engine/tubes/socketed-tube.ts';

// "6SL7, 12SL7 Average Plate Characteristics" as read in words at
// https://www.angelfire.com/planet/funwithtransistors/FIG-4A-06-gif.html (seen). Grid V, plate V, mA.
const POINTS: readonly [number, number, number][] = [
  [0, 50, 1],
  [0, 97, 2],
  [0, 140, 3],
  [0, 180, 4],
  [0, 215, 5],
  [-2, 185, 1],
  [-2, 235, 2],
  [-2, 280, 3],
  [-2, 322, 4],
  [-2, 349, 4.6],
  [-4, 320, 1],
  [-4, 375, 2],
  [-4, 423, 3],
  [-6, 460, 1],
  [-6, 480, 1.25],
];
const CUT_OFF: readonly [number, number, number][] = [
  [-1, 21, 0.025],
  [-2, 88, 0],
  [-3, 150, 0.02],
  [-4, 225, 0],
  [-5, 280, 0.02],
  [-6, 350, 0.05],
];

const { tube } = tubeFromCatalogue('6SL7-GT', { supplyVolts: 250, strays: SOCKET_STRAYS });

describe('6SL7-GT: the law of the one row (250 V, -2 V) against curves it was not made from', () => {
  // 12 %: the reading error of the curve, 0.1 mA at 1 mA, and its line width
  it.each(POINTS)('grid %d V, plate %d V: %d mA within 12 %%', (gridVolts, plateVolts, milliamperes) => {
    expect(Math.abs((plateAmps(tube.law, gridVolts, plateVolts) * 1e3) / milliamperes - 1)).toBeLessThan(0.12);
  });

  // 0.1 mA: one small square of the printed grid, which is as near as a reading of "0" or "0.02" can be
  it.each(CUT_OFF)(
    'near cut-off, grid %d V, plate %d V: %d mA within 0.1 mA',
    (gridVolts, plateVolts, milliamperes) => {
      expect(Math.abs(plateAmps(tube.law, gridVolts, plateVolts) * 1e3 - milliamperes)).toBeLessThan(0.1);
    },
  );

  it('is fitted closer, exponent and knee freed, by all the points than by the row', () => {
    const points = [...POINTS, ...CUT_OFF].map(([gridVolts, plateVolts, mA]) => ({
      gridVolts,
      plateVolts,
      plateAmps: mA / 1e3,
    }));
    const fit = lawFromCurvePoints(points, tube.law);
    const rms = (law: typeof tube.law) =>
      Math.sqrt(
        points.reduce((sum, p) => sum + (plateAmps(law, p.gridVolts, p.plateVolts) - p.plateAmps) ** 2, 0) /
          points.length,
      );
    expect(fit.freed).toEqual(['G', 'phi', 'gamma', 'C']);
    expect(rms(fit.law)).toBeLessThan(rms(tube.law));
    // 1.5: the misses are no more than the assumed reading errors and what one mu for all biases leaves
    expect(fit.rmsReadingErrors).toBeLessThan(1.5);
  });
});
