import { type Fault, InputError } from '../errors.ts';
import { formatQuantity } from '../parts/format-quantity.ts';

/** The grid's part of a tube law: I_g = Gg · ( ln(1 + exp(Cg·v)) / Cg )^xi. */
export interface GridLaw {
  /** A/V^xi, 0 and up. */
  readonly Gg: number;
  /** 1/V, above 0. */
  readonly Cg: number;
  /** No unit. */
  readonly xi: number;
}

/** Exponent of the grid law: space charge, the 3/2 law. */
export const GRID_EXPONENT = 1.5;

/**
 * Grid law from the current at zero volts and the e-fold below zero.
 *
 * @param ampsAtZeroVolts  A, 0 and up (0 gives a grid that draws nothing)
 * @param thermalVolts     V, above 0: kT/e of the cathode, about 0.09 V for oxide and 0.16 V for thoriated tungsten
 * @param xi               exponent, above 0
 * Derived here: well below zero the law falls as exp(xi·Cg·v), so Cg = 1/(xi·V_T); at zero it is Gg·(ln 2/Cg)^xi.
 */
export function gridLawFromZeroCurrent(ampsAtZeroVolts: number, thermalVolts: number, xi = GRID_EXPONENT): GridLaw {
  const Cg = 1 / (xi * thermalVolts);
  return { Gg: ampsAtZeroVolts / (Math.LN2 / Cg) ** xi, Cg, xi };
}

/** One reading of the free grid: its voltage with the leak `leakOhms` returned to `returnVolts` (0 = cathode). */
export interface GridReading {
  /** V against the cathode, read with an instrument that draws nothing. */
  readonly gridVolts: number;
  /** Ohms, above 0, the instrument's resistance in parallel included. */
  readonly leakOhms: number;
  readonly returnVolts?: number;
}

/** e-folds outside these volts belong to no cathode: 20 mV is 230 K, 1 V is 11 600 K. */
const THERMAL_VOLTS_RANGE = [0.02, 1] as const;

/**
 * Grid law from two voltages of the free grid across two known leaks.
 *
 * At rest 0 = I_g(v) + (v − v_return)/R, so each reading gives one point of the grid law; the ratio of the two
 * currents fixes Cg (it rises steadily with Cg, so one root by halving), and either current then fixes Gg.
 *
 * @returns the law; both readings lie on it within 1e-9 of the current
 * @throws InputError `grid-reading-not-positive`, `grid-readings-alike`, `grid-readings-contradict`
 */
export function gridLawFromReadings(
  readings: readonly [GridReading, GridReading],
  xi = GRID_EXPONENT,
  where = 'grid readings',
): GridLaw {
  const faults: Fault[] = [];
  const points = readings.map((reading, index) => {
    const amps = ((reading.returnVolts ?? 0) - reading.gridVolts) / reading.leakOhms;
    if (!(reading.leakOhms > 0) || !(amps > 0) || !Number.isFinite(amps)) {
      faults.push({
        code: 'grid-reading-not-positive',
        where: `${where} ${index + 1}`,
        got: `${formatQuantity(reading.gridVolts, 'voltage')} across ${formatQuantity(reading.leakOhms, 'resistance')}`,
        expected: 'a leak above 0 Ω and a grid more negative than the point the leak returns to',
        hint: 'the grid draws its current through the leak, so the leak pulls it up, never down',
      });
    }
    return { volts: reading.gridVolts, amps };
  });
  if (faults.length > 0) throw new InputError(faults);
  const [low, high] = points[0]!.volts < points[1]!.volts ? [points[0]!, points[1]!] : [points[1]!, points[0]!];
  const got = `${formatQuantity(low.amps, 'current')} at ${formatQuantity(low.volts, 'voltage')}, ${formatQuantity(high.amps, 'current')} at ${formatQuantity(high.volts, 'voltage')}`;
  if (high.volts - low.volts < 1e-6) {
    throw new InputError({
      code: 'grid-readings-alike',
      where,
      got,
      expected: 'two readings at different grid voltages',
      hint: 'use leaks that differ by a factor of two or more',
    });
  }
  const wanted = Math.log(high.amps / low.amps);
  const ratio = (c: number): number => xi * (logSoftplus(c * high.volts) - logSoftplus(c * low.volts));
  const gentlest = 1 / (xi * THERMAL_VOLTS_RANGE[1]);
  const steepest = 1 / (xi * THERMAL_VOLTS_RANGE[0]);
  if (!(wanted > ratio(gentlest)) || !(wanted < ratio(steepest))) {
    throw new InputError({
      code: 'grid-readings-contradict',
      where,
      got,
      expected: 'a grid current that rises e-fold within 20 mV to 1 V, as a hot cathode gives',
      hint: 'with the smaller leak the grid must sit nearer to zero and draw more; a meter of 10 MΩ across the leak counts as part of it',
    });
  }
  let below = Math.log(gentlest);
  let above = Math.log(steepest);
  for (let i = 0; i < 60; i++) {
    const middle = 0.5 * (below + above);
    if (ratio(Math.exp(middle)) < wanted) below = middle;
    else above = middle;
  }
  const Cg = Math.exp(0.5 * (below + above));
  return { Gg: high.amps / Math.exp(xi * (logSoftplus(Cg * high.volts) - Math.log(Cg))), Cg, xi };
}

/** ln(ln(1 + exp(z))), which tends to z far below zero. */
function logSoftplus(z: number): number {
  if (z < -40) return z;
  return Math.log(z > 0 ? z + Math.log1p(Math.exp(-z)) : Math.log1p(Math.exp(z)));
}
