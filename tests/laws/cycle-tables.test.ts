import { describe, expect, it } from 'vitest';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { type TableLaws, TableStore } from '../../src/engine/renderer/table-store.ts';
import { CHORD, MEAN } from '../../src/engine/tubes/cycle-average.ts';
import { cathodeAmps, gridAmps } from '../../src/engine/tubes/laws.ts';
import { gridLeak } from './grid-leak-circuit.ts';
import { overDecades, seededNumbers } from './seeded-numbers.ts';

/** Stated limits of the tables: of the largest current in the table, and of the current itself above 1 nA. */
const FULL_SCALE_SHARE = 1e-5;
const RELATIVE = 1e-3;
const LEAST_AMPS = 1e-9;
/**
 * The fundamental only sets the load on the tuned circuit and the carrier left on the plate, of which a ten-thousandth
 * is 0.001 dB.
 */
const FUNDAMENTAL_SHARE = 1e-4;
/**
 * Grid volts, mean and at the crest, beyond which no detector comes: there a grid conducts milliamperes, thousands of
 * times what a leak brings and more than a grid capacitor takes up from the steepest rise of a carrier.
 */
const HIGHEST_GRID_VOLTS = 1;
const HIGHEST_GRID_CREST_VOLTS = 4;

/** Midpoints of half a cycle: twice as many move no mean here by 1e-12 of itself, nor a fundamental by 1e-10. */
const COSINES = Array.from({ length: 400 }, (_, k) => Math.cos(((k + 0.5) * Math.PI) / 400));

/** Mean and peak fundamental of a law over a cycle, A, summed here and not by the program's own quadrature. */
function direct(law: (volts: number) => number, x: number, a: number): { mean: number; fundamental: number } {
  let mean = 0;
  let fundamental = 0;
  for (const cos of COSINES) {
    const amps = law(x + a * cos);
    mean += amps;
    fundamental += 2 * amps * cos;
  }
  return { mean: mean / COSINES.length, fundamental: fundamental / COSINES.length };
}

describe('tabulated cycle averages against direct sums', () => {
  const cases = (
    [
      ['30', 90],
      ['6SN7-GT', 180],
      ['12AX7', 250],
    ] as const
  ).flatMap(([tube, supplyVolts]) => [0.02, 0.5, 5].map((level) => [tube, supplyVolts, level] as const));

  it.each(cases)('%s at %d V, table for %d V rms', (tube, supplyVolts, levelVoltsRms) => {
    const circuit = gridLeak({ tube, supplyVolts, levelVoltsRms, plateOhms: 20e3 });
    const tables = new TableStore().lawsFor(restPoint(circuit), 1) as TableLaws;
    const { law } = circuit.tube;
    const highestControl = HIGHEST_GRID_VOLTS + supplyVolts / law.mu + law.phi;
    for (const { name, table, instantaneous, highest, highestCrest } of [
      {
        name: 'grid',
        table: tables.grid,
        instantaneous: (volts: number) => gridAmps(law, volts),
        highest: HIGHEST_GRID_VOLTS,
        highestCrest: HIGHEST_GRID_CREST_VOLTS,
      },
      {
        name: 'cathode',
        table: tables.cathode,
        instantaneous: (volts: number) => cathodeAmps(law, volts),
        highest: highestControl,
        highestCrest: Number.POSITIVE_INFINITY,
      },
    ]) {
      const random = seededNumbers(41);
      const { crest, peak } = table.parts;
      const [low, top] = [crest.knots[0]!, crest.knots[crest.knots.length - 1]!];
      const carrier = peak.knots[peak.knots.length - 1]!;
      const fullMean = instantaneous(top);
      const fullFundamental = direct(instantaneous, top - carrier, carrier).fundamental;
      const out = new Float64Array(6);
      const short = new Float64Array(6);
      for (let n = 0; n < 800; n++) {
        const a = n % 2 === 0 ? carrier * random() : overDecades(random(), 1e-4 * carrier, carrier);
        // crests anywhere in the table, in turn with crests about the tail and the knee, where detection happens
        const reach = n % 4 < 2 ? top : 0.6;
        const x = low + (reach - low) * random() - a;
        const { mean, fundamental } = direct(instantaneous, x, a);
        table.average(x, a, out);
        const at = `${name}, x = ${x}, a = ${a}`;
        const meanError = Math.abs(out[MEAN]! - mean);
        const fundamentalError = Math.abs(out[CHORD]! * a - fundamental);
        if (x < highest && x + a < highestCrest) {
          expect(meanError / fullMean, at).toBeLessThan(FULL_SCALE_SHARE);
          expect(fundamentalError / fullFundamental, at).toBeLessThan(FUNDAMENTAL_SHARE);
        }
        if (mean > LEAST_AMPS) expect(meanError / mean, at).toBeLessThan(RELATIVE);
        if (fundamental > LEAST_AMPS) expect(fundamentalError / fundamental, at).toBeLessThan(RELATIVE);
        table.levelsAt(Float64Array.of(x, a), short);
        expect([short[MEAN], short[CHORD]], at).toEqual([out[MEAN], out[CHORD]]);
      }
    }
  });

  it('gives nothing below its first knot and goes on straight past its last', () => {
    const circuit = gridLeak();
    const { grid } = new TableStore().lawsFor(restPoint(circuit), 1) as TableLaws;
    const { crest } = grid.parts;
    const top = crest.knots[crest.knots.length - 1]!;
    const at = (x: number, a: number): Float64Array => {
      const out = new Float64Array(6);
      grid.average(x, a, out);
      return out;
    };
    expect([...at(crest.knots[0]! - 0.1, 0.05)]).toEqual([0, 0, 0, 0, 0, 0]);
    const [one, two, three] = [at(top, 0.05)[MEAN]!, at(top + 1, 0.05)[MEAN]!, at(top + 2, 0.05)[MEAN]!];
    // equal steps to the rounding of their difference
    expect(Math.abs((three - two) / (two - one) - 1)).toBeLessThan(1e-12);
    expect(two).toBeGreaterThan(one);
  });
});
