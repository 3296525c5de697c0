import { describe, expect, it } from 'vitest';
import { restFigures } from '../../src/engine/circuits/analysis.ts';
import { type RestPoint, restPoint } from '../../src/engine/circuits/rest-point.ts';
import { InputError } from '../../src/engine/errors.ts';
import { type ListedVariant, listVariants } from '../../src/list/variants.ts';
import { faultText } from '../../src/results/fault-text.ts';
import { ran } from './command-run.ts';

const one = (text: string): ListedVariant => listVariants(text, 'set.yaml')[0]!;
/** The standard set with a stiff source, so that levels are the same whatever the detector draws. */
const withFault = (fault: string, more = ''): ListedVariant =>
  one(`fault: ${fault}\ntuned circuit: { loaded Q: 40 }\n${more}`);
const rested = (fault: string, more = ''): RestPoint => restPoint(withFault(fault, more).circuit);

/** The message a list is refused with. */
function refusal(text: string): string {
  try {
    listVariants(text, 'set.yaml');
  } catch (error) {
    if (error instanceof InputError) return error.faults.map(faultText).join('\n');
    throw error;
  }
  return '';
}

describe('a part that has failed, as the list says it', () => {
  const sound = withFault('none').circuit;

  it.each([
    ['leaky coupling 2 MΩ', { output: { couplingLeakOhms: 2e6 } }],
    ['Leaky coupling condenser 2M2', { output: { couplingLeakOhms: 2.2e6 } }],
    ['leaky bypass 500k', { plate: { bypassLeakOhms: 500e3, bypassFarads: 220e-12 } }],
    ['open bypass', { plate: { bypassFarads: 0 } }],
    // 2.2 MΩ and 80 % of it
    ['leak drifted +80 %', { detector: { leakOhms: 3.96e6 } }],
    ['grid leak drifted -50 %', { detector: { leakOhms: 1.1e6 } }],
    ['open bypass and leak drifted +100 %', { plate: { bypassFarads: 0 }, detector: { leakOhms: 4.4e6 } }],
  ])('%s', (fault, changed) => {
    const { circuit } = withFault(fault);
    expect(circuit).toMatchObject(changed);
    expect(circuit).not.toEqual(sound);
  });

  it('a weak tube scales both perveances and nothing else', () => {
    const { law } = withFault('weak valve 60 %').circuit.tube;
    const { G, Gg, ...rest } = sound.tube.law;
    expect(law).toEqual({ ...rest, G: G * 0.6, Gg: Gg * 0.6 });
  });

  it('an open leak leaves the leakage of the grid capacitor, where there is one', () => {
    const { detector } = withFault('open leak', 'detector: { grid capacitor leakage: 20M }').circuit;
    expect(detector).toMatchObject({ leakOhms: 20e6, leakPosition: 'across capacitor', capacitorLeakageOhms: null });
  });

  it('stands in a variant, and comma lists of the flag make variants with names of their own', () => {
    const text = 'variants:\n  as drawn: {}\n  as found: { fault: leaky bypass 500 kΩ }\n';
    expect(listVariants(text, 'set.yaml').map(({ circuit }) => circuit.plate.bypassLeakOhms ?? null)).toEqual([
      null,
      500e3,
    ]);
    const flag = { key: 'fault', value: 'none,weak tube 60 %,open bypass', where: '--fault' };
    expect(listVariants('name: set', 'set.yaml', [flag]).map(({ name, changes }) => [name, changes.fault])).toEqual([
      ['no fault', 'none'],
      ['weak tube 60 %', 'weak tube 60 %'],
      ['open bypass', 'open bypass'],
    ]);
  });
});

describe('a fault that cannot be', () => {
  it.each([
    ['open leak', /set\.yaml:2:8: fault: found open leak; expected a grid capacitor that leaks/],
    ['shorted bypass', /the plate would stand at 0 V against 90 V of supply/i],
    ['leeky bypass 500k', /nearest: leaky bypass/i],
    ['hum', /expected none, or leaky coupling 2 MΩ, leaky bypass 500 kΩ, weak tube 60 %/],
    ['leaky bypass', /as in leaky bypass 500 kΩ/],
    ['open bypass 3k', /as in open bypass/],
    ['leak drifted 80 %', /with its sign/],
    ['weak tube 140 %', /expected 2 % to 100 %/],
    ['leaky coupling 2 mV', /found leaky coupling 2 mV; expected a resistance in/],
    ['leaky coupling 2 Ω', /expected 1 kΩ to 1 TΩ/],
    ['[open bypass]', /none, or leaky coupling/],
    ['', /found nothing/],
  ])('%s', (fault, message) => {
    expect(refusal(`name: set\nfault: ${fault}\n`)).toMatch(message);
  });

  it('names the part that this circuit does not have', () => {
    expect(refusal('plate: { bypass: 0 }\nfault: open bypass\n')).toMatch(/a plate bypass that could fail/);
    expect(refusal('plate: { load: transformer 1:3 }\nfault: leaky coupling 2M\n')).toMatch(/a coupling capacitor/);
  });

  it.each([
    ['diode', 'weak tube 60 %'],
    ['crystal', 'leaky bypass 500k'],
    ['infinite impedance', 'leaky bypass 500k'],
    ['plate bend', 'leak drifted +80 %'],
  ])('a %s detector knows no %s', (kind, fault) => {
    const message = refusal(`detector: { kind: ${kind} }\nfault: ${fault}\n`);
    expect(message).toMatch(new RegExp(`set\\.yaml:2:8: .*a fault of a part that is in a ${kind} detector`));
  });

  it('is told of on the command line by its flag', async () => {
    const { status, err, out } = await ran(['respond', '--fault', 'open leak']);
    expect([status, out]).toEqual([2, '']);
    expect(err).toMatch(/^--fault: found open leak; expected a grid capacitor that leaks/);
  });
});

describe('what a fault does to the voltages', () => {
  const sound = rested('none');

  it('a weak tube draws less, and its plate stands higher', () => {
    const weak = rested('weak tube 60 %');
    expect(weak.currents.plateAmps).toBeLessThan(sound.currents.plateAmps);
    expect(weak.plateVolts).toBeGreaterThan(sound.plateVolts + 5);
  });

  it('a leaky bypass pulls the plate down and draws what Ohm says from the supply', () => {
    const leaky = rested('leaky bypass 500 kΩ');
    expect(leaky.plateVolts).toBeLessThan(sound.plateVolts - 0.5);
    const { supplyAmps, plateAmps, loadWatts } = restFigures(leaky);
    // last digits of the linear solution
    expect(supplyAmps - plateAmps).toBeCloseTo(leaky.plateVolts / 500e3, 12);
    expect(supplyAmps).toBeCloseTo((90 - leaky.plateVolts) / 220e3, 12);
    expect(loadWatts).toBeCloseTo((90 - leaky.plateVolts) ** 2 / 220e3, 12);
  });

  it('a leaky coupling capacitor loads the plate through what follows', () => {
    const leaky = rested('leaky coupling 2 MΩ');
    // 1 MΩ of the next grid
    expect(leaky.unknowns[leaky.audio.output.index]).toBeCloseTo(leaky.plateVolts / 3, 9);
    expect(restFigures(leaky).supplyAmps - leaky.currents.plateAmps).toBeCloseTo(leaky.plateVolts / 3e6, 12);
    expect(leaky.plateVolts).toBeLessThan(sound.plateVolts - 0.1);
  });

  it('a leak that has drifted up biases the grid lower, by what the grid law gives on either leak', () => {
    const drifted = rested('leak drifted +80 %');
    expect(drifted.gridVolts).toBeLessThan(sound.gridVolts - 0.02);
    expect(-drifted.gridVolts / drifted.currents.gridAmps).toBeCloseTo(3.96e6, -1);
  });

  it('an open bypass leaves the direct voltages but not the carrier on the plate', () => {
    const open = rested('open bypass');
    expect(open.plateVolts / sound.plateVolts).toBeCloseTo(1, 1);
    expect(restFigures(open).carrierOnPlateVoltsRms).toBeGreaterThan(3 * restFigures(sound).carrierOnPlateVoltsRms);
  });
});
