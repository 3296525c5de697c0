import { describe, expect, it } from 'vitest';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { magnitude } from '../../src/engine/circuits/complex.ts';
import { LinearResponse } from '../../src/engine/circuits/response.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { steadyTone } from '../../src/engine/circuits/steady-state.ts';
import { coil, gridLeak, stiff } from './grid-leak-circuit.ts';

// Rules of the trade: common practice, no source. Only orders are checked, so there is no tolerance, unless one stands.

/** Level at 5 kHz re 400 Hz, dB. */
function treble(circuit: DetectorCircuit): number {
  return new LinearResponse(restPoint(circuit)).decibels(5000);
}

/** Output at 400 Hz per unit of modulation, dB re 1 V. */
function loudness(circuit: DetectorCircuit): number {
  return 20 * Math.log10(magnitude(new LinearResponse(restPoint(circuit)).at(400).output));
}

/** Steps from one value to the next. */
function steps(values: readonly number[]): number[] {
  return values.slice(1).map((value, k) => value - values[k]!);
}

const TUBES = ['6SL7-GT', '6SN7-GT', '12AX7', '76', '30'] as const;
const SOURCES = [
  ['stiff source', stiff(30)],
  ['coil', coil(100)],
] as const;
const cases = TUBES.flatMap((tube) => SOURCES.map(([name, tunedCircuit]) => [tube, name, tunedCircuit] as const));

describe('plate', () => {
  // from 100 pF: below, a bypass also takes carrier off the plate, which can brighten by a few tenths of a dB
  it.each(cases)('%s, %s: more bypass is duller', (tube, _, tunedCircuit) => {
    const bypasses = [100e-12, 250e-12, 500e-12, 1e-9, 2e-9];
    for (const step of steps(bypasses.map((bypassFarads) => treble(gridLeak({ tube, tunedCircuit, bypassFarads }))))) {
      expect(step).toBeLessThan(0);
    }
  });

  // 180 V: at a lower supply a high load starves the tube, whose gain and Miller capacitance then fall
  it.each(cases)('%s, %s: a higher load with the same bypass is duller', (tube, _, tunedCircuit) => {
    const levels = [10e3, 22e3, 47e3, 100e3, 220e3].map((plateOhms) =>
      treble(gridLeak({ tube, tunedCircuit, plateOhms, supplyVolts: 180, bypassFarads: 500e-12 })),
    );
    for (const step of steps(levels)) expect(step).toBeLessThan(0);
  });
});

describe('leak, weak signal, 100 pF', () => {
  const LEAKS = [250e3, 500e3, 1e6, 2e6, 5e6];

  it.each(cases)('%s, %s: a longer leak is louder up to 2 MΩ, and at each step duller', (tube, _, tunedCircuit) => {
    const circuits = LEAKS.map((leakOhms) =>
      gridLeak({ tube, tunedCircuit, leakOhms, gridCapacitorFarads: 100e-12, levelVoltsRms: 0.01 }),
    );
    const louder = steps(circuits.map(loudness));
    for (const step of louder.slice(0, 3)) expect(step).toBeGreaterThan(0);
    // 2 to 5 MΩ: the treble corner comes down on 400 Hz and takes what the longer leak gives, to a decibel either way
    expect(Math.abs(louder[3]!)).toBeLessThan(1);
    for (const step of steps(circuits.map(treble))) expect(step).toBeLessThan(0);
  });
});

describe('power detection, 80 % modulation', () => {
  /** Second harmonic over the fundamental. */
  function second(circuit: DetectorCircuit, hertz: number): { grid: number; output: number } {
    const { grid, output } = steadyTone(restPoint(circuit), hertz, 0.8);
    return { grid: grid[2]! / grid[1]!, output: output[2]! / output[1]! };
  }
  const strong = { leakOhms: 250e3, levelVoltsRms: 1.4, gridCapacitorFarads: 100e-12 };
  const weak = { leakOhms: 2e6, levelVoltsRms: 0.05, gridCapacitorFarads: 100e-12 };
  const headroom = { supplyVolts: 180, plateOhms: 20e3 };

  it.each(TUBES)('%s: the grid has less than a quarter of the second harmonic of weak detection', (tube) => {
    for (const hertz of [400, 1000]) {
      const [loud, quiet] = [second(gridLeak({ tube, ...strong }), hertz), second(gridLeak({ tube, ...weak }), hertz)];
      expect(loud.grid / quiet.grid, `${hertz} Hz`).toBeLessThan(0.25);
    }
  });

  it('a 12AU7 with plate headroom passes it on', () => {
    for (const hertz of [400, 1000]) {
      const loud = second(gridLeak({ tube: '12AU7', ...strong, ...headroom }), hertz);
      const quiet = second(gridLeak({ tube: '12AU7', ...weak, ...headroom }), hertz);
      expect(loud.output / quiet.output, `${hertz} Hz`).toBeLessThan(0.25);
    }
  });

  it('at 90 V and 47 kΩ its plate spoils it', () => {
    for (const hertz of [400, 1000]) {
      const loud = second(gridLeak({ tube: '12AU7', ...strong }), hertz);
      const quiet = second(gridLeak({ tube: '12AU7', ...weak }), hertz);
      expect(loud.grid / quiet.grid, `${hertz} Hz`).toBeLessThan(0.25);
      expect(loud.output / quiet.output, `${hertz} Hz`).toBeGreaterThan(1);
    }
  });
});
