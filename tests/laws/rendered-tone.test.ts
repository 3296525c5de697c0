import { describe, expect, it } from 'vitest';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { magnitude } from '../../src/engine/circuits/complex.ts';
import { LinearResponse } from '../../src/engine/circuits/response.ts';
import { coil, gridLeak, stiff } from './grid-leak-circuit.ts';
import { ToneBench } from './rendered-tone.ts';

const TONES_HERTZ = [25, 50, 100, 250, 400, 1000, 2500, 5000, 7500, 10_000];
/** 30 times the slowest part, the coupling capacitor's 5 to 10 ms: what is left is 1e-13. */
const SETTLE_SECONDS = 0.3;
/** The program's own stated limit; of it 0.03 dB is the step rule's loss at 10 kHz, the rest bends of the laws. */
const LIMIT_DECIBELS = 0.05;

const weak = gridLeak({ levelVoltsRms: 0.02 });
const power = gridLeak({
  tube: '6SN7-GT',
  levelVoltsRms: 2,
  leakOhms: 250e3,
  gridCapacitorFarads: 100e-12,
  supplyVolts: 180,
  plateOhms: 20e3,
  bypassFarads: 2e-9,
});
const strained = gridLeak({ tube: '76', levelVoltsRms: 2, leakOhms: 2e6, gridCapacitorFarads: 250e-12 });

describe('a rendered tone of small modulation follows the linearised response', () => {
  it.each<[string, DetectorCircuit, number]>([
    ['weak signal, stiff source, 250 pF of bypass', weak, 48_000],
    [
      'hardly any signal, no bypass, 12AX7 with a high load',
      gridLeak({ tube: '12AX7', levelVoltsRms: 5e-3, supplyVolts: 180, plateOhms: 100e3, bypassFarads: 0 }),
      48_000,
    ],
    ['strong signal, short leak, 2 nF of bypass', power, 48_000],
    ['the same at 96 kHz, one step a sample', power, 96_000],
    ['the same at 44.1 kHz', power, 44_100],
    [
      'a coil of Q 100 loaded by its detector, 1 nF of bypass',
      gridLeak({ tube: '6SN7-GT', tunedCircuit: coil(100), levelVoltsRms: 0.3, bypassFarads: 1e-9 }),
      48_000,
    ],
    [
      'a tapped coil, leak across the capacitor, 96 kHz',
      gridLeak({
        tube: '76',
        tunedCircuit: coil(80, 0.5),
        levelVoltsRms: 1,
        leakOhms: 500e3,
        gridCapacitorFarads: 100e-12,
        leakPosition: 'across capacitor',
      }),
      96_000,
    ],
    [
      'a battery tube, positive return, station 4 kHz off',
      gridLeak({
        tube: '30',
        tunedCircuit: stiff(60, 4000),
        levelVoltsRms: 0.1,
        supplyVolts: 45,
        leakReturnVolts: 2,
        plateOhms: 20e3,
        bypassFarads: 100e-12,
      }),
      48_000,
    ],
  ])('5 %: %s', (_, circuit, rateHertz) => {
    const bench = new ToneBench(circuit, 0.05, rateHertz);
    const response = new LinearResponse(bench.rest);
    for (const hertz of TONES_HERTZ) {
      const rendered = bench.harmonicVolts(hertz, 0.05, SETTLE_SECONDS)[1]!;
      const decibels = 20 * Math.log10(rendered / (0.05 * magnitude(response.at(hertz).output)));
      expect(Math.abs(decibels), `${hertz} Hz`).toBeLessThan(LIMIT_DECIBELS);
    }
    expect(bench.renderer.counts.unsettled).toBe(0);
  });

  // a leak of 2 MΩ on 250 pF cannot fall as fast as 5 % at 5 kHz asks (1/ωRC is 6 %); half a per cent it can
  it('0.5 %: a long leak, where 5 % would clip diagonally', () => {
    const bench = new ToneBench(strained, 0.05);
    const response = new LinearResponse(bench.rest);
    for (const hertz of TONES_HERTZ) {
      const rendered = bench.harmonicVolts(hertz, 0.005, SETTLE_SECONDS)[1]!;
      const decibels = 20 * Math.log10(rendered / (0.005 * magnitude(response.at(hertz).output)));
      expect(Math.abs(decibels), `${hertz} Hz`).toBeLessThan(LIMIT_DECIBELS);
    }
  });
});
