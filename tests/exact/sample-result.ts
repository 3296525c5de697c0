import type { ResponseRow, Result, VariantResult } from '../../src/results/result.ts';

/** Preferred third-octave frequencies from 25 Hz to 16 kHz (ISO 266, from memory). */
const HERTZ = [
  25, 31.5, 40, 50, 63, 80, 100, 125, 160, 200, 250, 315, 400, 500, 630, 800, 1000, 1250, 1600, 2000, 2500, 3150, 4000,
  5000, 6300, 8000, 10_000, 12_500, 16_000,
] as const;

/**
 * A variant with invented figures (one low and one high corner) for tests of writers, which never look at their sense.
 *
 * @param lowHertz   corner of the rise, Hz; @param highHertz corner of the fall, Hz; both 0: flat
 */
export function sampleVariant(name: string, lowHertz: number, highHertz: number): VariantResult {
  const level = (hertz: number): number =>
    highHertz === 0 ? 0 : -10 * Math.log10(1 + (lowHertz / hertz) ** 2) - 10 * Math.log10(1 + (hertz / highHertz) ** 2);
  const response = HERTZ.map((hertz): ResponseRow => {
    const decibels = level(hertz) - level(400);
    const fall = highHertz === 0 ? 0 : 10 * Math.log10(1 + (hertz / highHertz) ** 2);
    return {
      hertz,
      decibels,
      phaseDegrees: highHertz === 0 ? 0 : -(180 / Math.PI) * Math.atan(hertz / highHertz),
      voltsRmsAt30Percent: 0.123456789 * 10 ** (decibels / 20),
      cost: {
        tunedCircuit: 0.3 * fall,
        gridCapacitor: 0.45 * fall,
        plateBypass: 0.8 * fall,
        load: -0.02 * fall + 0.001,
      },
    };
  });
  return {
    name,
    changes: { 'plate.bypass': '100p' },
    circuit: {
      station: { carrierHertz: 920e3, levelVoltsRms: 0.06, modulation: 0.8 },
      tunedCircuit: { loadedQ: 40, detuneHertz: 0, unloadedQ: null, coilHenries: null, tap: 1, retuned: null },
      detector: {
        kind: 'grid leak',
        law: 'tube',
        gridCapacitorFarads: 150e-12,
        leakOhms: 2.2e6,
        leakPosition: 'to cathode',
        leakReturnVolts: 0,
        capacitorLeakageOhms: null,
        chargeOhms: null,
      },
      tube: {
        type: '6SL7-GT',
        law: { G: 1.1e-3, C: 3.4, gamma: 1.26, mu: 70, phi: 0.6, Gg: 6e-4, Cg: 9.9, xi: 1.3 },
        gridPlateFarads: 2.8e-12,
        gridCathodeFarads: 3e-12,
        plateCathodeFarads: 3.8e-12,
      },
      plate: { supplyVolts: 90, bypassFarads: 100e-12, load: { kind: 'resistor', ohms: 220e3 } },
      output: { couplingFarads: 10e-9, loadOhms: 1e6, loadFarads: 50e-12 },
    },
    rest: {
      gridVolts: -0.5123,
      gridAmps: 2.34e-7,
      gridResistanceOhms: 345_678,
      plateVolts: 41.7,
      plateAmps: 2.195e-4,
      amplificationFactor: 68.2,
      plateResistanceOhms: 71_234,
      transconductanceSiemens: 9.57e-4,
      stageGain: 48.9,
      plateWatts: 9.15e-3,
      loadWatts: 1.06e-2,
      supplyAmps: 2.195e-4,
      inputCapacitanceFaradsAtAudio: 1.43e-10,
      inputCapacitanceFaradsAtCarrier: 3.1e-11,
      inputResistanceOhms: 456_000,
      carrierAtGridVoltsRms: 0.0598,
      carrierOnPlateVoltsRms: 0.0123,
      leakCornerHertz: 482.3,
      gridCornerHertz: 3071,
    },
    socket: [
      {
        electrode: 'plate',
        volts: 41.7,
        readings: [
          { meter: '10 MΩ', meterOhms: 10e6, rangeVolts: null, volts: 41.2 },
          { meter: '1 kΩ/V', meterOhms: 50e3, rangeVolts: 50, volts: 17.31 },
        ],
      },
      { electrode: 'cathode', volts: 0, readings: [{ meter: '10 MΩ', meterOhms: 10e6, rangeVolts: null, volts: 0 }] },
    ],
    response,
    lowCornerHertz: highHertz === 0 ? null : lowHertz,
    highCornerHertz: highHertz === 0 ? null : highHertz,
    distortion: [400, 1000].flatMap((hertz) =>
      [30, 80].map((modulationPercent) => ({
        hertz,
        modulationPercent,
        secondPercent: 0.1234 * modulationPercent,
        thirdPercent: 0.00567 * modulationPercent,
        totalPercent: 0.1241 * modulationPercent,
      })),
    ),
    sensitivity: [0.01, 0.02, 0.05, 0.1].map((levelVoltsRms) => ({
      levelVoltsRms,
      audioVoltsRmsAt30Percent: 12.3 * levelVoltsRms ** 2,
      secondPercent: 7.5,
    })),
    cautions: ['90 V on the plate supply: can shock; capacitors stay charged.'],
  };
}

export function sampleResult(variants: readonly VariantResult[]): Result {
  return { format: 'presolder-result/1', variants };
}
