import { describe, expect, it } from 'vitest';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { directCurrents } from '../../src/engine/circuits/direct-currents.ts';
import {
  COMMON_METERS,
  type Electrode,
  type Meter,
  type MeterReading,
  socketRows,
} from '../../src/engine/circuits/meter-readings.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { listVariants } from '../../src/list/variants.ts';
import { gridLeak } from './grid-leak-circuit.ts';

/** A tube that draws nothing at all, so that every voltage is a divider of resistors. */
const drawing = gridLeak({ plateOhms: 220e3, leakOhms: 2e6, leakReturnVolts: 3, loadOhms: 1e6 });
const dead: DetectorCircuit = {
  ...drawing,
  tube: { ...drawing.tube, law: { ...drawing.tube.law, G: 1e-30, Gg: 1e-30 } },
};
const withDropping = (circuit: DetectorCircuit): DetectorCircuit => ({
  ...circuit,
  plate: { ...circuit.plate, dropping: { ohms: 80e3, farads: 1e-6 } },
});
const withLeak = (circuit: DetectorCircuit, couplingLeakOhms: number): DetectorCircuit => ({
  ...circuit,
  output: { ...circuit.output, couplingLeakOhms },
});

function readings(circuit: DetectorCircuit, electrode: Electrode, meters: readonly Meter[]): readonly MeterReading[] {
  const row = socketRows(restPoint(circuit), meters).find((one) => one.electrode === electrode);
  return row?.readings ?? [];
}
const volts = (circuit: DetectorCircuit, electrode: Electrode, meter: Meter): number =>
  readings(circuit, electrode, [meter])[0]!.volts;
const fixed = (ohms: number): Meter => ({ kind: 'fixed', ohms });
const perVolt = (ohmsPerVolt: number, rangeVolts: number | null = null): Meter => ({
  kind: 'per volt',
  ohmsPerVolt,
  rangeVolts,
});

describe('what a meter reads where the tube draws nothing', () => {
  // Ohm's law by hand; the digits are those of the linear solution
  it.each([
    ['a plate of 220 kΩ with as much of meter', 'plate', fixed(220e3), 45],
    ['a plate of 220 kΩ with 10 MΩ', 'plate', fixed(10e6), (90 * 10) / 10.22],
    ['20 kΩ/V on the 100 V range: 2 MΩ', 'plate', perVolt(20e3), (90 * 2) / 2.22],
    ['1 kΩ/V on the 100 V range: 100 kΩ', 'plate', perVolt(1e3), (90 * 100) / 320],
    ['1 kΩ/V on a 250 V range of its own', 'plate', perVolt(1e3, 250), (90 * 250) / 470],
    ['a grid of 2 MΩ that returns to 3 V, with 10 MΩ', 'grid', fixed(10e6), 2.5],
    ['20 kΩ/V on the 5 V range: 100 kΩ', 'grid', perVolt(20e3), (3 * 0.1) / 2.1],
  ] as const)('%s', (_, electrode, meter, expected) => {
    expect(volts(dead, electrode, meter)).toBeCloseTo(expected, 6);
  });

  it('a supply behind 80 kΩ falls with the meter, one without does not', () => {
    expect(volts(withDropping(dead), 'supply', perVolt(1e3))).toBeCloseTo((90 * 100) / 180, 6);
    expect(volts(dead, 'supply', perVolt(1e3))).toBe(90);
  });

  it('behind a coupling capacitor that leaks 2 MΩ onto 1 MΩ', () => {
    const leaking = withLeak(dead, 2e6);
    const row = socketRows(restPoint(leaking)).find(({ electrode }) => electrode === 'behind coupling')!;
    expect(row.volts).toBeCloseTo((90 * 1) / 3.22, 6);
    // 1 MΩ and 10 MΩ side by side, then the 50 V range of 20 kΩ/V: 1 MΩ
    const beside = 10 / 11;
    expect(row.readings[0]!.volts).toBeCloseTo((90 * beside) / (2.22 + beside), 6);
    expect(row.readings[1]).toMatchObject({ rangeVolts: 50, meterOhms: 1e6 });
    expect(row.readings[1]!.volts).toBeCloseTo((90 * 0.5) / 2.72, 6);
  });

  it.each([
    [0.9, 1],
    [1, 1],
    [2.4, 2.5],
    [4.9, 5],
    [30, 50],
    [99, 100],
    [101, 250],
    [480, 500],
    [700, 1000],
  ])('%d V is read on the %d V range', (supplyVolts, rangeVolts) => {
    const circuit = { ...dead, plate: { ...dead.plate, supplyVolts } };
    expect(readings(circuit, 'supply', [perVolt(20e3)])).toEqual([
      { meter: '20 kΩ/V', meterOhms: 20e3 * rangeVolts, rangeVolts, volts: supplyVolts },
    ]);
  });
});

describe('what a meter reads of a tube at work', () => {
  const rest = restPoint(drawing);
  const rows = socketRows(rest);

  it('true voltages are those of the rest point, every electrode once', () => {
    expect(rows.map(({ electrode, volts: true_ }) => [electrode, true_])).toEqual([
      ['plate', rest.plateVolts],
      ['grid', rest.gridVolts],
      ['cathode', 0],
      ['supply', 90],
      ['behind coupling', 0],
    ]);
    for (const { readings: found } of rows) expect(found).toHaveLength(COMMON_METERS.length);
  });

  it('a meter on the plate is a leaky bypass of its resistance', () => {
    const leaking = restPoint({ ...drawing, plate: { ...drawing.plate, bypassLeakOhms: 10e6 } });
    // 1e-5: the leak loads the carrier on the plate too, where the meter is taken for a choke
    expect(volts(drawing, 'plate', fixed(10e6)) / leaking.plateVolts).toBeCloseTo(1, 5);
    expect(volts(drawing, 'plate', fixed(10e6))).toBeLessThan(rest.plateVolts);
  });

  it('a meter on the grid is a second leak, and lets the plate draw what it then does', () => {
    const meter = volts(drawing, 'grid', fixed(2e6));
    const parallel = restPoint(gridLeak({ plateOhms: 220e3, leakOhms: 1e6, leakReturnVolts: 1.5, loadOhms: 1e6 }));
    // the leak loads the stiff source's carrier as well, by a few millionths
    expect(meter / parallel.gridVolts).toBeCloseTo(1, 4);
  });

  it('an endless resistance reads true', () => {
    for (const electrode of ['plate', 'grid', 'supply'] as const) {
      const [reading] = readings(withDropping(drawing), electrode, [fixed(1e15)]);
      const row = socketRows(restPoint(withDropping(drawing)), []).find((one) => one.electrode === electrode)!;
      expect(reading!.volts / row.volts).toBeCloseTo(1, 6);
    }
  });

  it('no row for a coupling capacitor that is not there', () => {
    const straight = { ...drawing, output: { ...drawing.output, couplingFarads: null } };
    expect(socketRows(restPoint(straight)).map(({ electrode }) => electrode)).not.toContain('behind coupling');
  });
});

describe('other detectors', () => {
  const listed = (lines: string): DetectorCircuit =>
    listVariants(`tuned circuit: { loaded Q: 40 }\n${lines}`, 'set.yaml')[0]!.circuit;
  const bent = (cathodeOhms: number): DetectorCircuit =>
    listed(`detector: { kind: plate bend, cathode resistor: ${cathodeOhms} }\nplate: { load: 100k }`);

  it('plate bend: everything against the chassis, the cathode at the volts of its resistor', () => {
    const rest = restPoint(bent(10e3));
    const rows = new Map(socketRows(rest).map((row) => [row.electrode, row]));
    const { plateAmps: amps } = rest.currents;
    // Ohm's law; the digits are those of the linear solution, with an ohm of winding in the grid's return
    expect(rows.get('cathode')!.volts).toBeCloseTo(amps * 10e3, 6);
    expect(rows.get('plate')!.volts).toBeCloseTo(90 - amps * 100e3, 6);
    expect(rows.get('plate')!.volts - rows.get('cathode')!.volts).toBeCloseTo(rest.plateVolts, 6);
    expect(rows.get('grid')!.volts).toBeCloseTo(0, 6);
    expect(rows.get('supply')!.volts).toBe(90);
  });

  it('plate bend: a meter on the cathode is a smaller cathode resistor', () => {
    const [, , analogue] = socketRows(restPoint(bent(10e3))).find(({ electrode }) => electrode === 'cathode')!.readings;
    const ohms = 1 / (1 / 10e3 + 1 / analogue!.meterOhms);
    // 1e-4: the resistor is bypassed for the carrier, but not to nothing
    expect(analogue!.volts / (restPoint(bent(ohms)).currents.plateAmps * ohms)).toBeCloseTo(1, 4);
  });

  it('infinite impedance: the cathode stands above the grid, and follows the meter little', () => {
    const rest = restPoint(listed('detector: { kind: infinite impedance }'));
    const rows = new Map(socketRows(rest).map((row) => [row.electrode, row]));
    expect(rows.get('cathode')!.volts).toBeCloseTo(rest.currents.plateAmps * 47e3, 6);
    expect(rows.get('cathode')!.readings[0]!.volts / rows.get('cathode')!.volts).toBeGreaterThan(0.99);
    expect(rows.get('plate')!.volts).toBeGreaterThan(89);
  });

  it('a diode has its load and what follows, and a meter loads it', () => {
    const rows = socketRows(restPoint(listed('station: { level: 2 V }\ndetector: { kind: diode, diode load: 500k }')));
    expect(rows.map(({ electrode }) => electrode)).toEqual(['diode load', 'behind coupling']);
    // near the crest of 2.83 V, and lower with 5 kΩ of meter across
    expect(rows[0]!.volts).toBeGreaterThan(2);
    expect(rows[0]!.readings[2]!.volts).toBeLessThan(0.8 * rows[0]!.volts);
  });
});

describe('direct currents', () => {
  it('the supply feeds tube, leaking bypass and leaking coupling; load and dropping resistor share the drop', () => {
    const circuit = withLeak(withDropping(drawing), 2e6);
    const rest = restPoint({ ...circuit, plate: { ...circuit.plate, bypassLeakOhms: 500e3 } });
    const { supplyAmps, loadWatts, droppingWatts, coupledVolts } = directCurrents(rest);
    // Kirchhoff by hand, to the digits of the linear solution
    const byLeaks = rest.plateVolts / 500e3 + rest.plateVolts / 3e6;
    expect(supplyAmps / (rest.currents.plateAmps + byLeaks)).toBeCloseTo(1, 9);
    expect(supplyAmps / ((90 - rest.plateVolts) / 300e3)).toBeCloseTo(1, 9);
    expect(loadWatts / (supplyAmps ** 2 * 220e3)).toBeCloseTo(1, 9);
    expect(droppingWatts / (supplyAmps ** 2 * 80e3)).toBeCloseTo(1, 9);
    expect(coupledVolts / (rest.plateVolts / 3)).toBeCloseTo(1, 9);
  });
});
