import { describe, expect, it } from 'vitest';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { socketRows } from '../../src/engine/circuits/meter-readings.ts';
import { type RestPoint, restPoint } from '../../src/engine/circuits/rest-point.ts';
import { proveTone } from '../../src/engine/proof/tone-proof.ts';
import { referenceRest } from '../../src/engine/reference/reference-rest.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { listVariants } from '../../src/list/variants.ts';
import { gridLeak, stiff } from './grid-leak-circuit.ts';

const tables = new TableStore();
/** The lowest broadcast carrier, so that the integration of every cycle is short. */
const BASE = gridLeak({ carrierHertz: 530e3, levelVoltsRms: 0.2, plateOhms: 100e3, tunedCircuit: stiff(30) });

function leaking(bypassLeakOhms: number | null, couplingLeakOhms: number | null): DetectorCircuit {
  return {
    ...BASE,
    plate: { ...BASE.plate, bypassLeakOhms },
    output: { ...BASE.output, couplingLeakOhms },
  };
}

/** Other detectors as the list describes them, on the same carrier. */
function listed(lines: string): DetectorCircuit {
  const text = `station: { carrier: 530k, level: 0.5 V }\ntuned circuit: { loaded Q: 30 }\n${lines}`;
  return listVariants(text, 'set.yaml')[0]!.circuit;
}

const OTHERS = [
  ['plate bend with a leaky bypass', 'detector: { kind: plate bend, cathode resistor: 10k }\nfault: leaky bypass 200k'],
  [
    'infinite impedance with a leaky coupling capacitor',
    'detector: { kind: infinite impedance, cathode capacitor: 1n }\nfault: leaky coupling 500k',
  ],
  [
    'a diode with a leaky coupling capacitor',
    'detector: { kind: diode, diode load: 500k, diode bypass: 200p }\nfault: leaky coupling 500k',
  ],
] as const;

const CASES = [
  ['a leaky bypass', leaking(200e3, null)],
  ['a leaky coupling capacitor', leaking(null, 1e6)],
  ['both', leaking(500e3, 2e6)],
] as const;

describe('capacitors that leak', () => {
  it.each(CASES)('%s: renderer and integration of every cycle agree on a tone', (_, circuit) => {
    const rest = restPoint(circuit);
    expect(proveTone(rest, tables.lawsFor(rest, 0.8), 1000, 0.8)).toMatchObject({ holds: true });
  });

  it.each(OTHERS)('%s: they agree too, and the leak shows in the direct volts', (_, lines) => {
    const rest = restPoint(listed(lines));
    expect(proveTone(rest, tables.lawsFor(rest, 0.5), 1000, 0.5)).toMatchObject({ holds: true });
    const volts = (of: RestPoint): readonly number[] => socketRows(of, []).map((row) => row.volts);
    const sound = volts(restPoint(listed(lines.replace(/fault.*/, 'fault: none'))));
    // more than a meter misses
    expect(Math.max(...volts(rest).map((value, k) => Math.abs(value - sound[k]!)))).toBeGreaterThan(0.1);
  });

  it.each(CASES)('%s: both find the same rest point, and another than with sound capacitors', (_, circuit) => {
    const rest = restPoint(circuit);
    const reference = referenceRest(circuit, { kind: 'stiff', loadedQ: 30, detuneHertz: 0, levelVoltsRms: 0.2 });
    // 0.1 %: 96 steps a cycle leave the mean of a law within some 1e-4 of its value
    expect(Math.abs(reference.plateVolts / rest.plateVolts - 1)).toBeLessThan(1e-3);
    // 100 kΩ of load beside 1.5 MΩ to the cathode and less: a fiftieth and more of the plate's volts
    expect(rest.plateVolts).toBeLessThan(0.98 * restPoint(BASE).plateVolts);
  });

  it('a leaky coupling capacitor puts its share of the plate on what follows, by the divider it makes', () => {
    const rest = restPoint(leaking(null, 1e6));
    const { index } = rest.audio.output;
    // 470 kΩ of load below 1 MΩ of leak; the last digits are those of the linear solution
    expect(rest.unknowns[index]! / rest.plateVolts).toBeCloseTo(470 / 1470, 12);
  });
});
