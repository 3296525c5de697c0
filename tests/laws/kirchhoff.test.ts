import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  type Complex,
  complex,
  magnitude,
  minus,
  over,
  plus,
  scaled,
  times,
} from '../../src/engine/circuits/complex.ts';
import { type RestPoint, restPoint } from '../../src/engine/circuits/rest-point.ts';
import { cathodeAmps, gridAmps, plateKnee } from '../../src/engine/tubes/laws.ts';
import { coil, type GridLeakChoice, gridLeak, stiff } from './grid-leak-circuit.ts';
import { overDecades } from './seeded-numbers.ts';

/** The program's own stated limit on currents left over at a node, A. */
const LIMIT_AMPS = 1e-9;

/** Midpoints of half a cycle; at 10 V of carrier a tube's current summed so is good to 1e-13 of itself. */
const COSINES = Array.from({ length: 400 }, (_, k) => Math.cos(((k + 0.5) * Math.PI) / 400));

/** Mean and peak fundamental of an instantaneous law about x under a carrier of peak a, A. */
function cycle(law: (volts: number) => number, x: number, a: number): { mean: number; fundamental: number } {
  let [mean, fundamental] = [0, 0];
  for (const cos of COSINES) {
    const amps = law(x + a * cos);
    mean += amps;
    fundamental += 2 * amps * cos;
  }
  return { mean: mean / COSINES.length, fundamental: fundamental / COSINES.length };
}

/** A current of the given peak in phase with a voltage. */
function inPhase(peak: number, volts: Complex): Complex {
  const size = magnitude(volts);
  return size > 0 ? scaled(volts, peak / size) : complex(0);
}

/** What is left over at each node when the tube's instantaneous laws are put back into a rest point, A. */
function leftOver(rest: RestPoint): Record<'grid' | 'plate' | 'gridCarrier' | 'plateCarrier', number> {
  const { circuit, gridVolts: v, plateVolts: p } = rest;
  const { detector, tube, plate, output, station } = circuit;
  const { law } = tube;
  const omega = 2 * Math.PI * station.carrierHertz;
  const e = complex(rest.tuned.carrierPeakVolts);
  const vg = times(rest.phasors.grid, e);
  const vp = times(rest.phasors.plate, e);
  const u1 = plus(vg, scaled(vp, 1 / law.mu));
  const grid = cycle((volts) => gridAmps(law, volts), v, magnitude(vg));
  const cathode = cycle((volts) => cathodeAmps(law, volts), v + p / law.mu + law.phi, magnitude(u1));
  const knee = plateKnee(p);
  const leak = 1 / detector.leakOhms;
  const leakage = detector.capacitorLeakageOhms === null ? 0 : 1 / detector.capacitorLeakageOhms;
  const across = detector.leakPosition === 'across capacitor';
  const leakageFoot = across ? detector.leakReturnVolts : 0;
  const load = plate.load.kind === 'resistor' ? 1 / plate.load.ohms : Number.NaN;

  const gridCurrent = inPhase(grid.fundamental, vg);
  const plateCurrent = minus(inPhase(knee * cathode.fundamental, u1), gridCurrent);
  const series = complex((across ? leak : 0) + leakage, omega * detector.gridCapacitorFarads);
  const farads = (capacitance: number): Complex => complex(0, omega * capacitance);
  const feedback = times(farads(tube.gridPlateFarads), minus(vg, vp));
  // coupling capacitor in series with what it feeds
  const fed = plus(complex(1 / (output.loadOhms ?? Number.POSITIVE_INFINITY)), farads(output.loadFarads));
  const coupling = farads(output.couplingFarads ?? Number.NaN);
  const outward = over(times(coupling, fed), plus(coupling, fed));
  const plateSide = plus(plus(complex(load), farads(plate.bypassFarads + tube.plateCathodeFarads)), outward);
  const toCathode = plus(farads(tube.gridCathodeFarads), complex(across ? 0 : leak));
  const gridNode = minus(times(series, minus(e, vg)), plus(plus(times(toCathode, vg), feedback), gridCurrent));
  const plateNode = minus(plus(times(plateSide, vp), plateCurrent), feedback);
  return {
    grid: (detector.leakReturnVolts - v) * leak + (leakageFoot - v) * leakage - grid.mean,
    plate: (plate.supplyVolts - p) * load - knee * cathode.mean + grid.mean,
    gridCarrier: magnitude(gridNode),
    plateCarrier: magnitude(plateNode),
  };
}

const between = (least: number, most: number): fc.Arbitrary<number> =>
  fc.double({ min: 0, max: 1, noNaN: true }).map((share) => overDecades(share, least, most));

const CHOICES: fc.Arbitrary<GridLeakChoice> = fc.record({
  tube: fc.constantFrom('01-A', '30', '1LE3', '76', '6SN7-GT', '6SL7-GT', '12AX7', '6J7 triode-connected'),
  levelVoltsRms: fc.oneof(fc.constant(0), between(1e-3, 5)),
  carrierHertz: between(150e3, 15e6),
  tunedCircuit: fc.oneof(
    between(5, 200).map((q) => stiff(q)),
    fc.tuple(between(20, 200), between(0.1, 1)).map(([q, tap]) => coil(q, tap)),
  ),
  gridCapacitorFarads: between(30e-12, 1e-9),
  leakOhms: between(100e3, 10e6),
  leakPosition: fc.constantFrom('to cathode', 'across capacitor'),
  leakReturnVolts: fc.constantFrom(0, 0, 2, 5, -1),
  capacitorLeakageOhms: fc.oneof(fc.constant(null), between(1e6, 100e6)),
  supplyVolts: between(12, 300),
  bypassFarads: fc.oneof(fc.constant(0), between(10e-12, 5e-9)),
  plateOhms: between(5e3, 500e3),
  couplingFarads: between(1e-9, 1e-6),
  loadOhms: between(10e3, 2e6),
  loadFarads: fc.oneof(fc.constant(0), between(10e-12, 20e-9)),
});

describe('Kirchhoff at the rest point', () => {
  it('leaves less than a nanoampere at grid and plate, direct and carrier, in seeded circuits', () => {
    fc.assert(
      fc.property(CHOICES, (choice) => {
        const rest = restPoint(gridLeak(choice));
        for (const [node, amps] of Object.entries(leftOver(rest))) {
          expect(Math.abs(amps), node).toBeLessThanOrEqual(LIMIT_AMPS);
        }
        expect(rest.residualAmps).toBeLessThanOrEqual(LIMIT_AMPS);
        const openPeak = Math.SQRT2 * rest.circuit.station.levelVoltsRms;
        expect(Math.abs(rest.tuned.carrierPeakVolts - tankPeak(rest, openPeak))).toBeLessThanOrEqual(1e-9);
      }),
      { numRuns: 150, seed: 20_264 },
    );
  });
});

/** What the source and the coil leave at the tap under the detector's admittance, the dial set again, V peak. */
function tankPeak(rest: RestPoint, openPeak: number): number {
  const { tunedCircuit, station } = rest.circuit;
  if (tunedCircuit.kind === 'stiff') return openPeak;
  const e = complex(rest.tuned.carrierPeakVolts);
  if (!(e.re > 0)) return 0;
  const loss = 1 / (2 * Math.PI * station.carrierHertz * tunedCircuit.coilHenries * tunedCircuit.unloadedQ);
  // current into the detector through the grid capacitor and what lies across it
  const { detector } = rest.circuit;
  const leak = detector.leakPosition === 'across capacitor' ? 1 / detector.leakOhms : 0;
  const leakage = detector.capacitorLeakageOhms === null ? 0 : 1 / detector.capacitorLeakageOhms;
  const series = complex(leak + leakage, 2 * Math.PI * station.carrierHertz * detector.gridCapacitorFarads);
  const input = over(times(series, minus(e, times(rest.phasors.grid, e))), e);
  return (openPeak * loss) / (loss + tunedCircuit.tap ** 2 * input.re);
}
