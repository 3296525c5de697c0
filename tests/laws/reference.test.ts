import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { InputError } from '../../src/engine/errors.ts';
import { blockHarmonics } from '../../src/engine/reference/block-harmonics.ts';
import { referenceRest } from '../../src/engine/reference/reference-rest.ts';
import { runReference } from '../../src/engine/reference/run-reference.ts';
import type { ReferenceSource } from '../../src/engine/reference/source-drive.ts';
import { gridAmps, plateAmps } from '../../src/engine/tubes/laws.ts';
import { stageOf, stiffSource } from './reference-stage.ts';

describe('reference, the tube itself', () => {
  it('with no carrier the currents are those of the law and of the resistors', () => {
    const circuit = stageOf({ station: { levelVoltsRms: 0 }, detector: { leakReturnVolts: 1 } });
    const rest = referenceRest(circuit, stiffSource(circuit));
    // 1e-10 A and 1e-6 relative: the Newton inside a step stops at 1e-6 of the current.
    expect(Math.abs(rest.gridAmps - gridAmps(circuit.tube.law, rest.gridVolts))).toBeLessThan(1e-10);
    expect(rest.plateAmps / plateAmps(circuit.tube.law, rest.gridVolts, rest.plateVolts)).toBeCloseTo(1, 6);
    expect(rest.gridAmps).toBeCloseTo((1 - rest.gridVolts) / 1e6, 10);
    expect(rest.plateAmps).toBeCloseTo((90 - rest.plateVolts) / 47e3, 9);
  });

  it.each([0.01, 0.3, 3])('at %d V rms of carrier the mean currents are those of leak and load resistor', (volts) => {
    const circuit = stageOf({ station: { levelVoltsRms: volts } });
    const rest = referenceRest(circuit, stiffSource(circuit));
    // 1e-9 A: Kirchhoff's law to the limit asked of any rest point here.
    expect(Math.abs(rest.gridAmps + rest.gridVolts / 1e6)).toBeLessThan(1e-9);
    expect(Math.abs(rest.plateAmps - (90 - rest.plateVolts) / 47e3)).toBeLessThan(1e-9);
  });

  it('a starved plate stops at zero volts and never goes below', () => {
    const circuit = stageOf({ plate: { supplyVolts: 3, load: { kind: 'resistor', ohms: 2e6 } } });
    const rest = referenceRest(circuit, stiffSource(circuit));
    expect(rest.plateVolts).toBeGreaterThan(0);
    expect(rest.plateVolts).toBeLessThan(0.1);
  });

  /** Figures of one circuit at several numbers of steps, the last one's taken as the truth. */
  function orders(figure: (steps: number) => number): number[] {
    const [a, b, c, d] = [48, 96, 192, 384].map(figure) as [number, number, number, number];
    return [Math.log2((a - b) / (b - c)), Math.log2((b - c) / (c - d))];
  }

  // 0.15: the next term of the error falls as the fourth power, and at 48 steps it is a few hundredths of the first.
  it.each([0.05, 2])('errors fall with the square of the step at %d V rms', (volts) => {
    const circuit = stageOf({ station: { levelVoltsRms: volts } });
    for (const figure of ['gridVolts', 'plateVolts', 'carrierOnPlateVoltsRms', 'carrierAtGridVoltsRms'] as const) {
      const found = orders((stepsPerCycle) => referenceRest(circuit, stiffSource(circuit), { stepsPerCycle })[figure]);
      for (const order of found) expect(Math.abs(order - 2), figure).toBeLessThan(0.15);
    }
  });

  it('so do those of a tone, and 96 steps are within a twentieth of the limits it is to judge', () => {
    const circuit = stageOf({ station: { levelVoltsRms: 1 } });
    const tone = { audioHertz: 5000, modulation: 0.8, source: stiffSource(circuit, 30) };
    const runs = [48, 96, 192].map(
      (stepsPerCycle) => runReference(circuit, tone, { settleSeconds: 2e-3, stepsPerCycle }).output.peaks,
    ) as [Float64Array, Float64Array, Float64Array];
    const [a, b, c] = runs;
    expect(Math.abs(Math.log2((a[1]! - b[1]!) / (b[1]! - c[1]!)) - 2)).toBeLessThan(0.15);
    expect(Math.abs(20 * Math.log10(b[1]! / c[1]!))).toBeLessThan(0.1 / 20);
    expect(Math.abs(b[2]! / b[1]! / (c[2]! / c[1]!) - 1)).toBeLessThan(0.03 / 20);
  });

  // 1e-3: the stage's own capacitances change their reactance with the carrier, the tank is kept where it was.
  it('a tone that does not divide the carrier moves the carrier and the tank with it', () => {
    const tunedCircuit = {
      kind: 'coil',
      coilHenries: 180e-6,
      unloadedQ: 100,
      tap: 0.3,
      retuned: true,
      detuneHertz: 0,
    } as const;
    const circuit = stageOf({ tunedCircuit, plate: { bypassFarads: 1e-9 } });
    const source: ReferenceSource = { kind: 'coil', tankFarads: 139e-12, openTankFarads: 140.7e-12 };
    const run = runReference(circuit, { audioHertz: 7000, modulation: 0, source }, { settleSeconds: 0 });
    expect(run.carrierHertz).toBe(143 * 7000);
    const rest = referenceRest(circuit, source);
    expect(Math.abs(run.carrierAtGridVoltsRms / rest.carrierAtGridVoltsRms - 1)).toBeLessThan(1e-3);
  });

  it('where a run starts is forgotten', () => {
    const circuit = stageOf({ station: { levelVoltsRms: 0.5 }, output: { loadOhms: 100e3 } });
    const tone = { audioHertz: 2000, modulation: 0.5, source: stiffSource(circuit, 30) };
    const usual = runReference(circuit, tone, { settleSeconds: 3e-3 });
    const start = { gridVolts: -1.2, plateVolts: 70, outputVolts: 5 };
    const displaced = runReference(circuit, tone, { settleSeconds: 3e-3, start });
    // 1e-5: fifteen time constants of the slowest pair, 100 kΩ with 1 nF plus the plate's resistance, leave 1e-6.
    expect(Math.abs(displaced.output.peaks[1]! / usual.output.peaks[1]! - 1)).toBeLessThan(1e-5);
    expect(usual.drift).toBeLessThan(1e-5);
  });
});

describe('reference, what surrounds it', () => {
  // 1e-12: sums of a few thousand numbers of order 1.
  it('block means give back the harmonics of a known wave, the carrier and its sidebands left out', () => {
    const cycles = 200;
    const stepsPerBlock = 12;
    const perPeriod = cycles * 8;
    const blocks = new Float64Array(3 * perPeriod * 2);
    for (let b = 0; b < perPeriod * 2; b++) {
      for (let j = 1; j <= stepsPerBlock; j++) {
        const t = (2 * Math.PI * (b * stepsPerBlock + j)) / (perPeriod * stepsPerBlock);
        const audio = 0.7 + 2 * Math.cos(t + 0.3) + 0.4 * Math.sin(2 * t) + 0.05 * Math.cos(10 * t);
        const carrier = 50 * (1 + 0.5 * Math.cos(t)) * Math.cos(cycles * t) + 9 * Math.sin(2 * cycles * t);
        blocks[3 * b + 1]! += (audio + carrier) / stepsPerBlock;
      }
    }
    const peaks = blockHarmonics(blocks, 3 * perPeriod, 1, perPeriod, 2, stepsPerBlock);
    const expected = [0.7, 2, 0.4, 0, 0, 0, 0, 0, 0, 0, 0.05];
    expected.forEach((peak, n) => {
      expect(Math.abs(peaks[n]! - peak)).toBeLessThan(1e-12 * 50);
    });
  });

  it.each([
    ['too few steps', { steps: 8 }],
    ['steps that eight does not divide', { steps: 100 }],
    ['a tone too near the carrier', { audioHertz: 200e3 }],
    ['more than full modulation', { modulation: 1.2 }],
    ['no time', { settle: Number.NaN }],
    ['half a period', { periods: 0.5 }],
    ['a textbook law that nobody stated', { law: 'square' as const }],
  ])(
    'refuses %s',
    (_, bad: {
      steps?: number;
      audioHertz?: number;
      modulation?: number;
      settle?: number;
      periods?: number;
      law?: 'square';
    }) => {
      const circuit = stageOf({ detector: { law: bad.law ?? 'tube' } });
      const tone = {
        audioHertz: bad.audioHertz ?? 1000,
        modulation: bad.modulation ?? 0.5,
        source: stiffSource(circuit),
      };
      const options = { settleSeconds: bad.settle ?? 0, periods: bad.periods ?? 1, stepsPerCycle: bad.steps ?? 96 };
      expect(() => runReference(circuit, tone, options)).toThrow(InputError);
    },
  );

  it('takes nothing from the averaged engine but the shapes of circuit and tube', () => {
    const folder = new URL('../../src/engine/reference/', import.meta.url);
    const allowed = ['../circuits/circuit.ts', '../tubes/tube.ts', '../errors.ts'];
    for (const file of readdirSync(folder)) {
      const text = readFileSync(new URL(file, folder), 'utf8');
      for (const [, from] of text.matchAll(/from '([^']+)'/g)) {
        expect(from!.startsWith('./') || allowed.includes(from!), `${file} imports ${from}`).toBe(true);
      }
    }
  });
});
