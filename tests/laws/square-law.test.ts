import { describe, expect, it } from 'vitest';
import { type Complex, magnitude } from '../../src/engine/circuits/complex.ts';
import { LinearResponse, type ModulationResponse } from '../../src/engine/circuits/response.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { steadyTone } from '../../src/engine/circuits/steady-state.ts';
import { gridLeak, stiff } from './grid-leak-circuit.ts';
import { ToneBench } from './rendered-tone.ts';

// A square law rectifies (1 + m·cos)² = 1 + m²/2 + 2m·cos + (m²/2)·cos of twice: the current's second harmonic is m/4
// of its fundamental, and what follows is linear. Sources: m/4 with 80 % giving 20 % is F. E. Terman's as quoted at
// https://www.radiobanter.com/shortwave/43247-channel-based-am-tube-tuner-re-designs-single-frequency-high-performance-am-mw-receiver-post202635.html
// (seen); m = 0.6 giving 15 % is derived at https://ameblo.jp/ja8rqd/entry-12835362259.html (seen).
const CURRENT = [
  [0.3, 0.075],
  [0.6, 0.15],
  [0.8, 0.2],
  [1, 0.25],
] as const;
/** As stated for an ideal square law; the rendered one adds the step rule's 0.01 % at 1 kHz and below. */
const RELATIVE = 2e-3;

/** A tuned circuit so broad that it leaves the envelope alone: half its width is the carrier itself. */
const BROAD = stiff(0.5);
const circuit = gridLeak({ law: 'square', tunedCircuit: BROAD, levelVoltsRms: 0.05 });

function ratio(response: LinearResponse, hertz: number, of: (at: ModulationResponse) => Complex): number {
  return magnitude(of(response.at(2 * hertz))) / magnitude(of(response.at(hertz)));
}

describe('square law: second harmonic of m/4, as the stage then passes it', () => {
  it.each(CURRENT)('m = %d: %d of the rectified current, by harmonic balance', (depth, share) => {
    const rest = restPoint(circuit);
    const response = new LinearResponse(rest);
    for (const hertz of [100, 400, 1000, 3000]) {
      const tone = steadyTone(rest, hertz, depth);
      const grid = share * ratio(response, hertz, (at) => at.grid);
      const output = share * ratio(response, hertz, (at) => at.output);
      expect(Math.abs(tone.grid[2]! / tone.grid[1]! / grid - 1), `grid, ${hertz} Hz`).toBeLessThan(RELATIVE);
      expect(Math.abs(tone.output[2]! / tone.output[1]! / output - 1), `output, ${hertz} Hz`).toBeLessThan(RELATIVE);
      // nothing else comes of a square, to the rounding of a sum of 64 samples and the solver's 1e-11 V
      expect(tone.grid[3]! / tone.grid[1]!).toBeLessThan(1e-6);
    }
  });

  it.each(CURRENT)('m = %d: %d of the rectified current, rendered', (depth, share) => {
    const bench = new ToneBench(circuit, depth);
    const response = new LinearResponse(bench.rest);
    for (const hertz of [100, 400, 1000]) {
      const rendered = bench.harmonicVolts(hertz, depth, 0.2);
      const output = share * ratio(response, hertz, (at) => at.output);
      expect(Math.abs(rendered[2]! / rendered[1]! / output - 1), `${hertz} Hz`).toBeLessThan(RELATIVE);
    }
  });

  it('rectifies on the grid what the tube does when the signal is weak', () => {
    for (const tube of ['6SL7-GT', '76', '30']) {
      const weak = { tube, levelVoltsRms: 1e-3 };
      const at = (law: 'square' | 'tube'): number =>
        magnitude(new LinearResponse(restPoint(gridLeak({ ...weak, law }))).at(100).grid);
      // on the grid, and at 100 Hz, because the tube's plate rectifies a little too and C_gp brings that to the grid.
      // 1e-4: the next even term, as below
      expect(Math.abs(at('square') / at('tube') - 1), tube).toBeLessThan(1e-4);
    }
  });

  it('is what the tube itself tends to when the signal is weak', () => {
    const weak = gridLeak({ tunedCircuit: BROAD, levelVoltsRms: 1e-3 });
    const rest = restPoint(weak);
    const tone = steadyTone(rest, 400, 0.8);
    const output = 0.2 * ratio(new LinearResponse(rest), 400, (at) => at.output);
    // 1e-3: the averages' next even term is a few times (a/V_T)²/16, 2e-5 at 1.4 mV of peak and 90 mV of e-fold
    expect(Math.abs(tone.output[2]! / tone.output[1]! / output - 1)).toBeLessThan(1e-3);
  });
});
