import { describe, expect, it } from 'vitest';
import type { DetectorCircuit, DiodeParts } from '../../src/engine/circuits/circuit.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { referenceLaws, referenceSource } from '../../src/engine/proof/reference-request.ts';
import { runReference } from '../../src/engine/reference/run-reference.ts';
import { BESSEL_ROWS } from '../laws/bessel-rows.ts';
import { stiff } from '../laws/grid-leak-circuit.ts';
import { heardAt, plainCircuit } from '../laws/other-detector-circuits.ts';

/** A diode behind a stiff source of a peak, its bypass a short for the carrier. */
function diodeAt(peakVolts: number, changes: Partial<DiodeParts>): DetectorCircuit {
  const plain = plainCircuit('diode');
  const diode = { ...plain.detector.diode!, bypassFarads: 0.1e-6, capacitanceFarads: 0, ...changes };
  return heardAt(
    {
      ...plain,
      tunedCircuit: stiff(1),
      detector: { ...plain.detector, diode },
      output: { couplingFarads: 1e-9, loadOhms: null, loadFarads: 0 },
    },
    peakVolts / Math.SQRT2,
  );
}

const ohmsAtInput = (circuit: DetectorCircuit): number => 1 / restPoint(circuit).tuned.input.re;

/**
 * The linear diode: tan θ − θ = π·R_d/R, efficiency cos θ, input resistance π·R_d/(θ − sin θ·cos θ). F. E. Terman, Radio
 * Engineers' Handbook, 1943; F. Langford-Smith, Radio Designer's Handbook, 4th edition, chapter 27 (both from memory).
 * Figures worked by hand from them.
 */
const LINEAR = [
  [10, 0.6455, 0.8352],
  [20, 0.7518, 0.7004],
  [100, 0.9035, 0.5643],
  [200, 0.9376, 0.54],
  [1000, 0.978, 0.5135],
] as const;

describe('linear diode: efficiency and input resistance', () => {
  const LOAD_OHMS = 1e6;
  /** The ideal rectifier at a grid without capacitances, its load across the capacitor: the tuned circuit meets it alone. */
  function rectifier(ratio: number, farads: number): DetectorCircuit {
    const plain = heardAt(plainCircuit('grid leak'), 10 / Math.SQRT2);
    return {
      ...plain,
      tunedCircuit: stiff(1),
      tube: { ...plain.tube, gridCathodeFarads: 0, gridPlateFarads: 0 },
      detector: {
        ...plain.detector,
        law: 'linear',
        leakOhms: LOAD_OHMS,
        leakPosition: 'across capacitor',
        chargeOhms: LOAD_OHMS / ratio,
        gridCapacitorFarads: farads,
      },
    };
  }

  // 0.02 %: half of the last digit printed, and the hundredth of an ohm that the coil's winding has
  it.each(LINEAR)('R/R_d %d: %d, R_in/R %d', (ratio, efficiency, input) => {
    const circuit = rectifier(ratio, 1e-6);
    expect(Math.abs(-restPoint(circuit).gridVolts / 10 / efficiency - 1)).toBeLessThan(2e-4);
    expect(Math.abs(ohmsAtInput(circuit) / LOAD_OHMS / input - 1)).toBeLessThan(2e-4);
  });

  // R in series with a junction of 2 mV: its own 30 mV of 10 V are 0.3 %; with that of the input's charge, 1 %
  it.each(LINEAR)('the same as a diode with series resistance, R/R_d %d: %d, R_in/R %d', (ratio, efficiency, input) => {
    const law = {
      kind: 'exponential',
      saturationAmps: 1e-9,
      idealityVolts: 0.002,
      seriesOhms: LOAD_OHMS / ratio,
    } as const;
    const circuit = diodeAt(10, { law, loadOhms: LOAD_OHMS });
    expect(Math.abs(-restPoint(circuit).gridVolts / 10 / efficiency - 1)).toBeLessThan(0.01);
    expect(Math.abs(ohmsAtInput(circuit) / LOAD_OHMS / input - 1)).toBeLessThan(0.01);
  });

  // 2 %: the carrier ripples by 1/(f·R·C) = 1 % of the volts, and 96 steps see the angle of conduction in steps of 3.8°
  it.each(LINEAR)('every carrier cycle integrated, R/R_d %d: %d', (ratio, efficiency) => {
    const rest = restPoint(rectifier(ratio, 100e-12));
    const stage = referenceLaws(rest)!;
    const run = runReference(
      rest.circuit,
      { audioHertz: 5000, modulation: 0, source: referenceSource(rest), stage },
      { settleSeconds: 0.001, periods: 1 },
    );
    expect(Math.abs(-run.grid.peaks[0]! / 10 / efficiency - 1)).toBeLessThan(0.02);
  });
});

/**
 * The exponential diode with nothing to feed: it rests at V·ln I0(x), x the carrier's peak over V, and takes
 * 2·I_s·I1(x)/I0(x) of carrier. That I0 gives the error and I0, I1 the input: D. W. Knight, Diode detectors for RF
 * measurement, part 1, 2016, abstract, https://vdocuments.net/diode-detectors-for-rf-measurement-part-1-rectifier-circuits-2020-6-22-valve.html,
 * seen. Figures from tables of Bessel functions, worked by hand.
 */
describe('exponential diode: modified Bessel functions', () => {
  const VOLTS = 0.03;
  const SATURATION_AMPS = 1e-6;
  it.each(BESSEL_ROWS)('carrier %d e-folds: ln I0 %d, I1/I0 %d', (x, rest, ratio) => {
    const law = {
      kind: 'exponential',
      saturationAmps: SATURATION_AMPS,
      idealityVolts: VOLTS,
      seriesOhms: 0,
    } as const;
    const circuit = diodeAt(x * VOLTS, { law, loadOhms: 1e12 });
    // half of the last digit, and what 1e12 Ω draw of 1 µA: the rest's own share of 3 µA
    expect(Math.abs(-restPoint(circuit).gridVolts / VOLTS - rest)).toBeLessThan(1e-6 + 4e-6 * rest);
    const carrierAmps = (x * VOLTS) / ohmsAtInput(circuit);
    expect(Math.abs(carrierAmps / (2 * SATURATION_AMPS) - ratio)).toBeLessThan(1.1e-5);
  });
});
