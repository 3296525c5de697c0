import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { PlateLoad } from '../../src/engine/circuits/circuit.ts';
import { inductanceAt } from '../../src/engine/circuits/load-transformer.ts';
import { type RestPoint, restPoint } from '../../src/engine/circuits/rest-point.ts';
import { cathodeAmps, gridAmps, plateKnee } from '../../src/engine/tubes/laws.ts';
import { type GridLeakChoice, gridLeak } from './grid-leak-circuit.ts';
import { choke, earpiece, loaded, matching, phones, transformer } from './loaded-circuits.ts';

/** The program's own stated limit on currents left over at a node, A. */
const LIMIT_AMPS = 1e-9;

/** Plate current of the instantaneous laws, averaged over a cycle of the carrier at the rest point, A. */
function plateAmps(rest: RestPoint): number {
  const { law } = rest.circuit.tube;
  const { gridVolts: v, plateVolts: p, currents } = rest;
  let sum = 0;
  for (let k = 0; k < 400; k++) {
    const cos = Math.cos(((k + 0.5) * Math.PI) / 400);
    sum += plateKnee(p) * cathodeAmps(law, v + p / law.mu + law.phi + currents.tubeCarrierPeak * cos);
    sum -= gridAmps(law, v + currents.gridCarrierPeak * cos);
  }
  return sum / 400;
}

/** What direct current meets in a load, ohms: a winding's wire, a choke's beside its core loss. */
function directOhms(load: PlateLoad): number {
  switch (load.kind) {
    case 'resistor':
      return load.ohms;
    case 'choke':
      return load.coreLossOhms === null ? load.dcOhms : 1 / (1 / load.dcOhms + 1 / load.coreLossOhms);
    case 'transformer':
      return load.primaryDcOhms;
    case 'phones':
      return load.dcOhms;
  }
}

const LOADS: readonly (readonly [string, PlateLoad])[] = [
  ['large choke', choke('large')],
  ['small choke', choke('small')],
  ['choke without losses', { ...choke('small'), coreLossOhms: null, selfFarads: null }],
  ['good transformer', transformer('good 1:3')],
  ['plain transformer', transformer('plain 1:3')],
  ['early transformer', transformer('early 1:5')],
  ['phones of 2000 ohm', phones('2000 ohm')],
  ['phones of 4000 ohm', phones('4000 ohm')],
  [
    'phones without losses or resonance',
    { ...phones('2000 ohm'), eddyLossOhms: null, resonanceOhms: null, resonanceHenries: null, resonanceFarads: null },
  ],
];

const CHOICES: fc.Arbitrary<GridLeakChoice> = fc.record({
  tube: fc.constantFrom('01-A', '30', '76', '6SN7-GT', '6SL7-GT', '12AX7'),
  supplyVolts: fc.double({ min: 12, max: 250, noNaN: true }),
  levelVoltsRms: fc.constantFrom(0, 5e-3, 0.1, 1, 5),
  leakOhms: fc.constantFrom(220e3, 1e6, 5e6),
  bypassFarads: fc.constantFrom(0, 100e-12, 2e-9),
});

describe.each(LOADS)('%s in the plate lead, at rest', (_, load) => {
  it('the plate stands at the supply less the drop on the wire, in seeded circuits', () => {
    fc.assert(
      fc.property(CHOICES, (choice) => {
        const rest = restPoint(loaded(gridLeak(choice), load));
        const drop = (rest.circuit.plate.supplyVolts - rest.plateVolts) / directOhms(load);
        expect(Math.abs(drop - plateAmps(rest))).toBeLessThanOrEqual(LIMIT_AMPS);
        expect(Math.abs(rest.currents.plateAmps - plateAmps(rest))).toBeLessThanOrEqual(LIMIT_AMPS);
        expect(rest.residualAmps).toBeLessThanOrEqual(LIMIT_AMPS);
      }),
      { numRuns: 25, seed: 45 },
    );
  });

  it('a resistor in the supply lead and a carrier choke add their drops', () => {
    const plate = {
      carrierChoke: { henries: 0.08, dcOhms: 250, selfFarads: 4e-12, bypassFarads: 100e-12 },
      dropping: { ohms: 10e3, farads: 1e-6 },
    };
    const rest = restPoint(loaded(gridLeak({ tube: '76' }), load, { plate }));
    const drop = (rest.circuit.plate.supplyVolts - rest.plateVolts) / (directOhms(load) + 10e3 + 250);
    expect(Math.abs(drop - plateAmps(rest))).toBeLessThanOrEqual(LIMIT_AMPS);
    expect(rest.residualAmps).toBeLessThanOrEqual(LIMIT_AMPS);
  });
});

/** Volts at the output at rest. */
function outputVolts(rest: RestPoint): number {
  return rest.unknowns[rest.audio.output.index]! * rest.audio.output.weight;
}

describe('direct current goes no further than the load', () => {
  // 1e-9 V: rounding of a network whose conductances differ by ten powers of ten
  it.each<[string, PlateLoad]>([
    ['transformer', transformer('good 1:3')],
    ['choke', choke('large')],
    ['resistor', { kind: 'resistor', ohms: 47e3 }],
  ])('%s: nothing at the next grid', (_, load) => {
    expect(Math.abs(outputVolts(restPoint(loaded(gridLeak(), load))))).toBeLessThan(1e-9);
  });

  it.each<[string, number, PlateLoad]>([
    ['phones', 1 / 3, phones('2000 ohm')],
    ['a low-impedance earpiece', 1 / 30, earpiece],
  ])('%s behind a matching transformer: none', (_, ratio, fed) => {
    if (fed.kind !== 'phones') throw new Error('phones were meant');
    const output = { couplingFarads: 1e-6, loadOhms: null, loadFarads: 0, matching: matching(ratio), phones: fed };
    const rest = restPoint(loaded(gridLeak(), { kind: 'resistor', ohms: 47e3 }, { output }));
    expect(Math.abs(outputVolts(rest))).toBeLessThan(1e-9);
  });

  it('phones in the plate lead carry the whole plate current', () => {
    const rest = restPoint(loaded(gridLeak({ tube: '76' }), phones('2000 ohm')));
    // counted from the plate to the supply
    const coilAmps = rest.unknowns[rest.audio.output.index]!;
    expect(Math.abs(coilAmps + plateAmps(rest))).toBeLessThanOrEqual(LIMIT_AMPS);
  });
});

describe('a primary that falls with direct current', () => {
  const load = transformer('plain 1:3');
  const falling = load.falling!;

  it('meets both readings of the pair, and a hyperbola between', () => {
    expect(inductanceAt(falling, 0)).toBe(falling.henriesWithoutCurrent);
    expect(inductanceAt(falling, falling.amps)).toBeCloseTo(falling.henriesAtAmps, 12);
    // worked by hand: 20 H and 12 H at 3 mA; at 1.5 mA 20/(1 + 1/3)
    expect(inductanceAt({ henriesWithoutCurrent: 20, amps: 3e-3, henriesAtAmps: 12 }, 1.5e-3)).toBeCloseTo(15, 12);
  });

  it('stands at what its rest current leaves, less and less as the supply rises', () => {
    let last = falling.henriesWithoutCurrent;
    for (const supplyVolts of [12, 22, 45, 90, 135]) {
      const rest = restPoint(loaded(gridLeak({ tube: '76', supplyVolts }), load));
      const { load: solved } = rest.circuit.plate;
      if (solved.kind !== 'transformer') throw new Error('the load has become another');
      // 1e-6: the current is that of the round before, from which it hardly differs
      expect(Math.abs(solved.primaryHenries / inductanceAt(falling, plateAmps(rest)) - 1)).toBeLessThan(1e-6);
      expect(solved.primaryHenries).toBeLessThan(last);
      last = solved.primaryHenries;
    }
  });

  it('without a pair stays as stated', () => {
    const rest = restPoint(loaded(gridLeak({ tube: '76' }), { ...load, primaryHenries: 17, falling: null }));
    const { load: solved } = rest.circuit.plate;
    expect(solved.kind === 'transformer' && solved.primaryHenries).toBe(17);
  });
});
