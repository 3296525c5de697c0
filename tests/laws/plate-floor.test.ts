import { describe, expect, it } from 'vitest';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { DetectorRenderer } from '../../src/engine/renderer/detector-renderer.ts';
import { STAGE_TIMES } from '../../src/engine/renderer/implicit-rule.ts';
import { StageStepper } from '../../src/engine/renderer/stage-stepper.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { gridLeak } from './grid-leak-circuit.ts';

const TUBES = ['6SN7-GT', '12AX7', '6J7 triode-connected'] as const;
const LEVELS = [0, 0.05, 5] as const;
const STEPS_A_SECOND = 96_000;

/** Lowest plate volts while a tone modulates the carrier by 80 %, over twenty of its periods and more. */
function lowestPlateVolts(
  tables: TableStore,
  tube: string,
  levelVoltsRms: number,
  hertz: number,
): { volts: number; unsettled: number } {
  const rest = restPoint(gridLeak({ tube, supplyVolts: 22, plateOhms: 150e3, levelVoltsRms }));
  const stepper = new StageStepper(rest, tables.lawsFor(rest, 0.8), 1 / STEPS_A_SECOND);
  let volts = Number.POSITIVE_INFINITY;
  for (let n = 0; n < STEPS_A_SECOND / 20; n++) {
    STAGE_TIMES.forEach((fraction, stage) => {
      const angle = (2 * Math.PI * hertz * (n + fraction)) / STEPS_A_SECOND;
      stepper.drive[stage] = rest.tuned.carrierPeakVolts * (1 + 0.8 * Math.sin(angle));
    });
    stepper.step();
    volts = Math.min(volts, stepper.plateVolts());
  }
  return { volts, unsettled: stepper.unsettled };
}

describe('22 V and 150 kΩ: the plate never goes negative', () => {
  const tables = new TableStore();
  const cases = TUBES.flatMap((tube) => LEVELS.map((level) => [tube, level] as const));

  it.each(cases)('%s, %d V rms, at rest', (tube, levelVoltsRms) => {
    const rest = restPoint(gridLeak({ tube, supplyVolts: 22, plateOhms: 150e3, levelVoltsRms }));
    expect(rest.plateVolts).toBeGreaterThan(0);
    expect(rest.plateVolts).toBeLessThan(22);
    expect(rest.currents.plateAmps).toBeGreaterThan(0);
  });

  it.each(cases)('%s, %d V rms modulated by four fifths', (tube, levelVoltsRms) => {
    for (const hertz of [400, 5000]) {
      const { volts, unsettled } = lowestPlateVolts(tables, tube, levelVoltsRms, hertz);
      expect(volts, `${hertz} Hz`).toBeGreaterThan(0);
      expect(unsettled, `${hertz} Hz`).toBe(0);
    }
  });

  // A coupling capacitor of 1 F passes every change of the plate, so the renderer's output is the plate less its rest.
  it.each(TUBES)('%s in a rendered clip', (tube) => {
    const circuit = gridLeak({ tube, supplyVolts: 22, plateOhms: 150e3, levelVoltsRms: 5, couplingFarads: 1 });
    const rest = restPoint(circuit);
    const renderer = new DetectorRenderer(rest, tables.lawsFor(rest, 0.8), 48_000);
    const input = Float64Array.from({ length: 9600 }, (_, n) => 0.8 * Math.sin((2 * Math.PI * 400 * n) / 48_000));
    const output = new Float64Array(input.length);
    renderer.process(input, output, input.length);
    expect(output.reduce((least, volts) => Math.min(least, volts), 0) + rest.plateVolts).toBeGreaterThan(0);
    expect(renderer.counts.unsettled).toBe(0);
  });
});

// A plate that has run down to the knee of its current: tangents taken far above it point far below zero.
describe('a starved plate', () => {
  it.each([
    ['12AX7', 470e3, 0.5, 100e-12],
    ['12AX7', 470e3, 5, 100e-12],
    ['12AX7', 150e3, 3.5, 0],
    ['6SL7-GT', 470e3, 2, 0],
  ])('%s behind %d Ω, %d V rms, bypass of %d F: every step settles', (tube, plateOhms, levelVoltsRms, bypassFarads) => {
    const rest = restPoint(gridLeak({ tube, supplyVolts: 22, plateOhms, levelVoltsRms, bypassFarads }));
    const laws = new TableStore().lawsFor(rest, 1);
    for (const kind of ['fastest', 'plain'] as const) {
      const renderer = new DetectorRenderer(rest, laws, 48_000, 'normal', kind);
      for (const hertz of [2500, 10_000]) {
        const input = Float64Array.from({ length: 1200 }, (_, n) => Math.sin((2 * Math.PI * hertz * n) / 48_000));
        renderer.reset();
        renderer.process(input, new Float64Array(input.length), input.length);
        expect(renderer.counts.unsettled, `${kind}, ${hertz} Hz`).toBe(0);
      }
    }
  });
});
