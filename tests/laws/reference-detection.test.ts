import { describe, expect, it } from 'vitest';
import { totalHarmonicDistortion } from '../../src/engine/measure/harmonics.ts';
import type { StageLaws } from '../../src/engine/reference/instantaneous-laws.ts';
import { type ReferenceRest, referenceRest } from '../../src/engine/reference/reference-rest.ts';
import { runReference } from '../../src/engine/reference/run-reference.ts';
import { type StageChanges, stageOf, stiffSource } from './reference-stage.ts';

/** No tube capacitances: a diode with its load, as the textbooks draw it. */
const BARE_TUBE = { gridPlateFarads: 0, gridCathodeFarads: 0 };

/** kT/e at 1000 K, V, from the exact constants of the SI of 2019. */
const EFOLD_VOLTS = (1.380649e-23 * 1000) / 1.602176634e-19;

function exponential(currentAmps: number): StageLaws {
  return { grid: { law: 'exponential', currentAmps, efoldVolts: EFOLD_VOLTS }, plate: { law: 'none' } };
}

/** A diode stage at rest for a carrier of `peak` V at its input. */
function diodeRest(peak: number, detector: StageChanges['detector'], stage: StageLaws): ReferenceRest {
  const circuit = stageOf({
    station: { levelVoltsRms: peak / Math.SQRT2 },
    detector: { leakPosition: 'across capacitor', ...detector },
    tube: BARE_TUBE,
  });
  return referenceRest(circuit, stiffSource(circuit), { stage });
}

describe('reference with an exponential grid', () => {
  // Computed from I0 exp(v/VT) = -v/R with VT = 86.17 mV; no authority beyond the formula. 1e-3 because the table is
  // printed to four digits and the grid that draws 20 µA at 0 V moves by 0.3 of that in the last one.
  it.each([
    [5e-6, 0.5e6, -0.2124],
    [5e-6, 1e6, -0.2561],
    [5e-6, 2e6, -0.3017],
    [20e-6, 0.5e6, -0.3017],
    [20e-6, 1e6, -0.3489],
    [20e-6, 2e6, -0.3974],
  ])('%d A at 0 V through %d ohms rests at %d V', (amps, leakOhms, volts) => {
    const rest = diodeRest(0, { leakOhms }, exponential(amps));
    expect(Math.abs(rest.gridVolts / volts - 1)).toBeLessThan(1e-3);
  });

  // V/VT against ln I0(V/VT), computed from the series; that I0 rules the diode's error is said by D. W. Knight, Diode
  // detectors for RF measurement, part 1, 2016, abstract (seen).
  // 2e-5: the table's six digits, and the ripple left on 10 nF by 1 µA, below 0.1 mV against 86 mV · ln I0.
  it.each([
    [0.1, 0.002498],
    [0.5, 0.06155],
    [1, 0.235914],
    [2, 0.823994],
    [5, 3.304682],
    [10, 7.942972],
    [20, 17.58961],
    [100, 96.779733],
  ])('a fed-in current shifts by VT ln I0(V/VT): V/VT = %d gives %d', (x, logarithm) => {
    // 1 µA that the rectified volts cannot change: a leak of 10 GΩ to 10 kV.
    const detector = {
      leakOhms: 1e10,
      leakReturnVolts: 1e4,
      leakPosition: 'to cathode',
      gridCapacitorFarads: 1e-8,
    } as const;
    const laws = exponential(20e-6);
    const quiet = diodeRest(0, detector, laws);
    const rest = diodeRest(x * EFOLD_VOLTS, detector, laws);
    const gridRatio = (rest.carrierAtGridVoltsRms * Math.SQRT2) / EFOLD_VOLTS / x;
    expect(Math.abs(gridRatio - 1)).toBeLessThan(1e-3);
    // The leak's current rises by shift / 10 kV of itself, and the grid's share of the carrier is not quite all.
    const fed = Math.log((1e4 - rest.gridVolts) / (1e4 - quiet.gridVolts));
    const shift = (quiet.gridVolts - rest.gridVolts) / EFOLD_VOLTS + fed;
    expect(Math.abs(shift - logarithm)).toBeLessThan(2e-5 * logarithm + 5e-7 + Math.abs(gridRatio - 1) * x);
  });

  // Computed from the same series for VT 86.17 mV, 20 µA, 1 MΩ; 0.5 % on the shift where three digits are printed,
  // else half of the last digit; 0.5 % on the resistance.
  it.each([
    [0.01, 0.00023, 5e-6, 247e3],
    [0.1, 0.02169, 0.005 * 0.02169, 270e3],
    [1, 0.71971, 0.005 * 0.71971, 489e3],
    [5, 4.51892, 0.005 * 4.51892, 518e3],
  ])('a carrier of %d V peak moves the grid by %d V', (peak, shiftVolts, tolerance, ohms) => {
    const detector = { leakOhms: 1e6, gridCapacitorFarads: 1e-8 };
    const rest = diodeRest(peak, detector, exponential(20e-6));
    const quiet = diodeRest(0, detector, exponential(20e-6));
    expect(Math.abs(quiet.gridVolts - rest.gridVolts - shiftVolts)).toBeLessThan(tolerance);
    expect(Math.abs(1 / rest.inputSiemens.re / ohms - 1)).toBeLessThan(0.005);
  });
});

describe('reference with an ideal rectifier', () => {
  const rectifier = (chargeOhms: number): StageLaws => ({
    grid: { law: 'rectifier', chargeOhms },
    plate: { law: 'none' },
  });

  // tan θ - θ = π Rd / R, efficiency cos θ, Rin = π Rd / (θ - sin θ cos θ): F. E. Terman, Radio Engineers' Handbook,
  // 1943, and F. Langford-Smith, Radio Designer's Handbook, 4th edition, chapter 27 (both from memory); figures
  // computed from the formulas. 1e-3: the table's four digits and the current that starts and stops between two of 96
  // steps; a render is allowed 2 %, a judge less. Ripple is below 0.1 % here.
  it.each([
    [10, 49.8, 0.6455, 0.8352],
    [20, 41.25, 0.7518, 0.7004],
    [100, 25.37, 0.9035, 0.5643],
    [200, 20.34, 0.9376, 0.54],
    [1000, 12.03, 0.978, 0.5135],
  ])('R/Rd = %d: half angle %d°, efficiency %d, input resistance %d of R', (ratio, degrees, efficiency, input) => {
    const theta = (degrees * Math.PI) / 180;
    expect(Math.tan(theta) - theta).toBeCloseTo(Math.PI / ratio, 3);
    const rest = diodeRest(2, { leakOhms: 1e6, gridCapacitorFarads: 2e-9 }, rectifier(1e6 / ratio));
    expect(Math.abs(-rest.gridVolts / 2 / efficiency - 1)).toBeLessThan(1e-3);
    expect(Math.abs(1 / rest.inputSiemens.re / 1e6 / input - 1)).toBeLessThan(1e-3);
  });

  // m = 1/sqrt(1 + (ωRC)²) at the onset of diagonal clipping (from memory; the factor sqrt(1 - m²) seen at
  // https://newbedev.com/rc-time-constant-and-diode-detector). 5 % in m where the distortion stands 0.5 % above its
  // floor: the corner of the clipped part is small at first. Carriers large, R/Rd = 2000.
  it.each([
    [1000, 1e6, 250e-12, 0.537],
    [1000, 1e6, 100e-12, 0.847],
    [3000, 1e6, 100e-12, 0.469],
    [5000, 250e3, 100e-12, 0.786],
  ])('%d Hz, %d ohms, %d F: the slope limit is passed at m = %d', (hertz, leakOhms, gridCapacitorFarads, onset) => {
    const product = 2 * Math.PI * hertz * leakOhms * gridCapacitorFarads;
    expect(1 / Math.hypot(1, product)).toBeCloseTo(onset, 3);
    const circuit = stageOf({
      station: { levelVoltsRms: 3 },
      detector: { leakOhms, gridCapacitorFarads, leakPosition: 'across capacitor' },
      tube: BARE_TUBE,
    });
    const distortion = (modulation: number): number => {
      const tone = { audioHertz: hertz, modulation, source: stiffSource(circuit), stage: rectifier(leakOhms / 2000) };
      return totalHarmonicDistortion(runReference(circuit, tone, { settleSeconds: 2e-3 }).grid.peaks)!;
    };
    const floor = distortion(0.5 * onset);
    let low = 0.5 * onset;
    let high = Math.min(1, 1.5 * onset);
    for (let pass = 0; pass < 9; pass++) {
      const middle = 0.5 * (low + high);
      if (distortion(middle) > floor + 0.005) high = middle;
      else low = middle;
    }
    expect(Math.abs((0.5 * (low + high)) / onset - 1)).toBeLessThan(0.05);
  });
});
