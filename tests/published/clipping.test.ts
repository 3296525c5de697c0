import { describe, expect, it } from 'vitest';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { type RestPoint, restPoint } from '../../src/engine/circuits/rest-point.ts';
import { type SteadyTone, steadyTone } from '../../src/engine/circuits/steady-state.ts';
import { gridLeak, stiff } from '../laws/grid-leak-circuit.ts';
import { heardAt, plainCircuit } from '../laws/other-detector-circuits.ts';
import { ToneBench } from '../laws/rendered-tone.ts';

/** Share of the fundamental that all higher harmonics have together. */
function distortion(peaks: Float64Array): number {
  return Math.hypot(...peaks.subarray(2)) / peaks[1]!;
}

/** Depth at which distortion has risen by half a per cent above that at half of the expected depth. */
function onset(rest: RestPoint, hertz: number, expected: number, at: (tone: SteadyTone) => Float64Array): number {
  const share = (depth: number): number => distortion(at(steadyTone(rest, hertz, depth)));
  const floor = share(0.5 * expected);
  // 10 % to either side, found to 0.6 %: an onset outside comes out as that end, and fails
  let [clean, clipped] = [0.9 * expected, Math.min(1, 1.1 * expected)];
  for (let halving = 0; halving < 5; halving++) {
    const middle = (clean + clipped) / 2;
    if (share(middle) > floor + 0.005) clipped = middle;
    else clean = middle;
  }
  return clean;
}

/**
 * Diagonal clipping: m = 1/√(1 + (ωRC)²) is the deepest modulation that the leak can follow. F. E. Terman, Radio Engineers'
 * Handbook, 1943 (from memory); the factor √(1 − m²) behind it: RC time constant and diode detector,
 * https://newbedev.com/rc-time-constant-and-diode-detector, seen. For a large carrier and an ideal rectifier. Depths under
 * 0.3 are left out: the rectifier's charge resistance, a thousandth of the leak, then rounds the corner by as much.
 */
describe('diagonal clipping, ideal rectifier, 5 V', () => {
  // 5 % of the depth, as the corner is not sharp: the onset is called at half a per cent of distortion above the floor
  it.each([
    [2e6, 250e-12, 400, 0.623],
    [2e6, 250e-12, 1000, 0.303],
    [1e6, 250e-12, 1000, 0.537],
    [1e6, 100e-12, 3000, 0.469],
    [1e6, 100e-12, 5000, 0.303],
    [250e3, 100e-12, 5000, 0.786],
  ])('%d Ω, %d F, %d Hz: from m = %d', (leakOhms, gridCapacitorFarads, hertz, depth) => {
    const circuit = gridLeak({
      law: 'linear',
      levelVoltsRms: 5,
      leakOhms,
      gridCapacitorFarads,
      tunedCircuit: stiff(1),
    });
    const bare = { ...circuit.tube, gridCathodeFarads: 0, gridPlateFarads: 0 };
    const found = onset(restPoint({ ...circuit, tube: bare }), hertz, depth, (tone) => tone.grid);
    expect(Math.abs(found / depth - 1)).toBeLessThan(0.05);
  });
});

/**
 * Negative peaks clip where the load for audio is lighter than that for direct current: from m = R_ac/R_dc. F. E. Terman,
 * Radio Engineers' Handbook, 1943; F. Langford-Smith, Radio Designer's Handbook, 4th edition, chapter 27 (both from memory).
 */
describe('negative-peak clipping, 5 V', () => {
  function feeding(loadOhms: number, nextOhms: number, bypassFarads = 50e-12): DetectorCircuit {
    const plain = heardAt(plainCircuit('diode'), 5);
    const law = {
      kind: 'exponential',
      saturationAmps: 1e-9,
      idealityVolts: 0.02,
      seriesOhms: loadOhms / 1000,
    } as const;
    const diode = { ...plain.detector.diode!, law, loadOhms, bypassFarads };
    return {
      ...plain,
      tunedCircuit: stiff(1),
      detector: { ...plain.detector, diode },
      output: { couplingFarads: 0.1e-6, loadOhms: nextOhms, loadFarads: 0 },
    };
  }

  // 3 %: the diode's own resistance and e-fold soften the corner by 2 % of the carrier
  it.each([
    [500e3, 1e6, 0.6667],
    [250e3, 1e6, 0.8],
    [500e3, 500e3, 0.5],
    [250e3, 250e3, 0.5],
  ])('%d Ω into %d Ω: from m = %d', (loadOhms, nextOhms, depth) => {
    const found = onset(restPoint(feeding(loadOhms, nextOhms)), 400, depth, (tone) => tone.output);
    expect(Math.abs(found / depth - 1)).toBeLessThan(0.03);
  });

  it('is rendered: a vacuum diode, 500 kΩ into 1 MΩ, is clean at 0.8 of that depth, and not at 1.2 of it', () => {
    const plain = plainCircuit('diode').detector.diode!;
    const circuit = feeding(500e3, 1e6, 120e-12);
    const diode = { ...plain, loadOhms: 500e3 };
    const bench = new ToneBench({ ...circuit, detector: { ...circuit.detector, diode } }, 1);
    const share = (depth: number): number => distortion(bench.harmonicVolts(400, depth, 0.4));
    const [clean, clipped] = [share(0.8 * 0.667), share(1.2 * 0.667)];
    // measured: 0.8 and 4.9 %; a fifth of the depth cut off the trough of a sine is some 5 % of distortion
    expect(clean).toBeLessThan(0.01);
    expect(clipped).toBeGreaterThan(0.04);
  });
});
