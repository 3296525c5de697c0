import { describe, expect, it } from 'vitest';
import type { DetectorCircuit, Output, Plate } from '../../src/engine/circuits/circuit.ts';
import { magnitude } from '../../src/engine/circuits/complex.ts';
import { LinearResponse } from '../../src/engine/circuits/response.ts';
import { TableStore } from '../../src/engine/renderer/table-store.ts';
import { coil, gridLeak } from './grid-leak-circuit.ts';
import { LOAD_KINDS, loadCases } from './load-cases.ts';
import { expectProved } from './load-proof.ts';
import { choke, earpiece, loaded, matching, phones, transformer } from './loaded-circuits.ts';
import { ToneBench } from './rendered-tone.ts';

const tables = new TableStore();

// The long run has twelve of each.
describe.each(LOAD_KINDS)('renderer against every carrier cycle: %s', (kind) => {
  it.each(loadCases(kind, 2).map((c) => [c.said, c] as const))('%s', (_, c) => {
    expectProved(c, tables);
  });
});

const TONES_HERTZ = [25, 50, 100, 250, 400, 1000, 2500, 5000, 7500, 10_000];
/** 15 times the slowest part, a coupling of 20 ms, and 30 times the slowest winding: what is left is 1e-6. */
const SETTLE_SECONDS = 0.3;
/**
 * The program's own stated limit. Of it a transformer that resonates near 10 kHz takes 0.03 dB through the step rule,
 * and a strong station's bends of the laws at 5 % up to 0.02 dB.
 */
const LIMIT_DECIBELS = 0.05;

const resistor = { kind: 'resistor', ohms: 47e3 } as const;
const weak = gridLeak({ tube: '76' });
const strong = gridLeak({ tube: '6SN7-GT', levelVoltsRms: 1, leakOhms: 250e3, gridCapacitorFarads: 100e-12 });
const onCoil = gridLeak({
  levelVoltsRms: 0.1,
  leakOhms: 1e6,
  gridCapacitorFarads: 100e-12,
  bypassFarads: 100e-12,
  tunedCircuit: coil(100),
});
const bare = { plate: { bypassFarads: 0 } };
const carrierChoke = (henries: number, bypassFarads: number): { plate: Partial<Plate> } => ({
  plate: { carrierChoke: { henries, dcOhms: 3e3 * henries, selfFarads: 3e-12, bypassFarads } },
});
const through = (couplingFarads: number, rest: Partial<Output>): { output: Partial<Output> } => ({
  output: { couplingFarads, loadOhms: null, loadFarads: 0, ...rest },
});

const CIRCUITS: [string, DetectorCircuit, number?][] = [
  ['large choke, weak signal', loaded(weak, choke('large'))],
  ['small choke on a coil', loaded(onCoil, choke('small'))],
  ['good transformer, weak signal', loaded(weak, transformer('good 1:3'))],
  ['good transformer, strong signal', loaded(strong, transformer('good 1:3'))],
  ['good transformer on a coil', loaded(onCoil, transformer('good 1:3'))],
  ['the same at 44.1 kHz', loaded(onCoil, transformer('good 1:3')), 44_100],
  ['the same at 96 kHz', loaded(onCoil, transformer('good 1:3')), 96_000],
  ['plain transformer without bypass, strong signal', loaded(strong, transformer('plain 1:3'), bare)],
  ['early transformer without bypass, weak signal', loaded(weak, transformer('early 1:5'), bare)],
  ['early transformer without bypass on a coil', loaded(onCoil, transformer('early 1:5'), bare)],
  ['phones in the plate lead, strong signal', loaded(strong, phones('2000 ohm'))],
  [
    'phones through a matching transformer',
    loaded(weak, resistor, through(100e-9, { matching: matching(1 / 3), phones: phones('2000 ohm') })),
  ],
  [
    'a low-impedance earpiece through a matching transformer, behind a choke',
    loaded(strong, choke('small'), through(470e-9, { matching: matching(1 / 30), phones: earpiece })),
  ],
  ['crystal earpiece', loaded(onCoil, resistor, through(1e-9, { loadOhms: 20e6, loadFarads: 500e-12 }))],
  ['ceramic earpiece with 100 kΩ', loaded(strong, resistor, through(100e-9, { loadOhms: 100e3, loadFarads: 15e-9 }))],
  // A choke that resonates with the bypasses at ten times the highest audio and more: the step rule must not swing with it.
  ['carrier choke 2.5 mH, 1 nF behind', loaded(weak, resistor, carrierChoke(2.5e-3, 1e-9))],
  ['carrier choke 10 mH, 2 nF behind', loaded(strong, phones('2000 ohm'), carrierChoke(10e-3, 2e-9))],
  ['carrier choke 30 mH, 3 nF behind, on a coil', loaded(onCoil, choke('large'), carrierChoke(30e-3, 3e-9))],
  ['carrier choke 80 mH, 250 pF behind', loaded(onCoil, transformer('good 1:3'), carrierChoke(80e-3, 250e-12))],
  [
    'dropping resistor',
    loaded(weak, transformer('plain 1:3'), { plate: { dropping: { ohms: 10e3, farads: 500e-9 } } }),
  ],
];

describe('a rendered tone of 5 % follows the linearised response', () => {
  it.each(CIRCUITS)('%s', (_, circuit, rateHertz = 48_000) => {
    const bench = new ToneBench(circuit, 0.05, rateHertz);
    const response = new LinearResponse(bench.rest);
    for (const hertz of TONES_HERTZ) {
      const rendered = bench.harmonicVolts(hertz, 0.05, SETTLE_SECONDS)[1]!;
      const decibels = 20 * Math.log10(rendered / (0.05 * magnitude(response.at(hertz).output)));
      expect(Math.abs(decibels), `${hertz} Hz`).toBeLessThan(LIMIT_DECIBELS);
    }
    expect(bench.renderer.counts.unsettled).toBe(0);
  });
});
