import { describe, expect, it } from 'vitest';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import { proveTone } from '../../src/engine/proof/tone-proof.ts';
import { referenceRest } from '../../src/engine/reference/reference-rest.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
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
