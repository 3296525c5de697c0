import { describe, expect, it } from 'vitest';
import { steadyTone } from '../../src/engine/circuits/steady-state.ts';
import { coil, type GridLeakChoice, gridLeak } from './grid-leak-circuit.ts';
import { ToneBench } from './rendered-tone.ts';

const SETTLE_SECONDS = 0.3;
const TONES = [
  [100, 0.8],
  [400, 0.3],
  [1000, 0.8],
  [5000, 0.8],
] as const;
// Two ways to one answer, so far closer than the program's limits of 0.1 dB and 3 %. What is left is the step rule at
// harmonics of 5 kHz (0.3 % at the second, 0.7 % at the third) and the moves that a step may leave undone, 1e-5 of the
// carrier, which at 5 mV are 0.01 dB.
const FUNDAMENTAL_DECIBELS = 0.02;
const SECOND_SHARE = 0.005;
const THIRD_SHARE = 0.01;
/** A harmonic near nothing is held to this share of the fundamental. */
const FLOOR_SHARE = 1e-4;

const CIRCUITS: readonly [string, GridLeakChoice, number][] = [
  ['long leak, 6SL7-GT', {}, 48_000],
  [
    'short leak and plate headroom, 6SN7-GT',
    {
      tube: '6SN7-GT',
      leakOhms: 250e3,
      gridCapacitorFarads: 100e-12,
      supplyVolts: 180,
      plateOhms: 20e3,
      tunedCircuit: coil(80),
    },
    96_000,
  ],
];

describe('a rendered tone agrees with the steady state by harmonic balance', () => {
  const cases = CIRCUITS.flatMap(([name, choice, rateHertz]) =>
    [0.005, 0.05, 0.5, 5].map((level) => [name, level, choice, rateHertz] as const),
  );
  it.each(cases)('%s, %d V rms', (_, levelVoltsRms, choice, rateHertz) => {
    const bench = new ToneBench(gridLeak({ ...choice, levelVoltsRms }), 0.8, rateHertz);
    for (const [hertz, depth] of TONES) {
      const tone = `${hertz} Hz, ${100 * depth} %`;
      const rendered = bench.harmonicVolts(hertz, depth, SETTLE_SECONDS);
      const { output: steady, residualVolts } = steadyTone(bench.rest, hertz, depth);
      expect(residualVolts, tone).toBeLessThan(1e-9);
      expect(Math.abs(20 * Math.log10(rendered[1]! / steady[1]!)), tone).toBeLessThan(FUNDAMENTAL_DECIBELS);
      for (const [harmonic, share] of [
        [2, SECOND_SHARE],
        [3, THIRD_SHARE],
      ] as const) {
        const error = Math.abs(rendered[harmonic]! / rendered[1]! - steady[harmonic]! / steady[1]!);
        const allowed = (share * steady[harmonic]!) / steady[1]! + FLOOR_SHARE;
        expect(error / allowed, `${tone}, harmonic ${harmonic}`).toBeLessThan(1);
      }
    }
    expect(bench.renderer.counts.unsettled).toBe(0);
  });
});
