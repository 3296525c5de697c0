import { describe, expect, it } from 'vitest';
import { analyse } from '../../src/engine/circuits/analysis.ts';
import { type Caution, type CautionCode, restCautions } from '../../src/engine/circuits/cautions.ts';
import type { DetectorCircuit } from '../../src/engine/circuits/circuit.ts';
import { LinearResponse } from '../../src/engine/circuits/response.ts';
import { restPoint } from '../../src/engine/circuits/rest-point.ts';
import {
  carrierAtOutputVoltsRms,
  chargingSwing,
  followedDepth,
  followedHertz,
  gridFarads,
} from '../../src/engine/circuits/signal-cautions.ts';
import { listVariants } from '../../src/list/variants.ts';
import { gridLeak, stiff } from './grid-leak-circuit.ts';

/** Cautions of the standard set with these lines over it; a stiff source, so that levels do not move. */
function cautionsOf(lines: string): Caution[] {
  const [{ circuit, ratings, cautions }] = listVariants(`tuned circuit: { loaded Q: 40 }\n${lines}`, 'set.yaml') as [
    ReturnType<typeof listVariants>[number],
  ];
  return [...restCautions(restPoint(circuit), ratings), ...cautions];
}
const codes = (lines: string): CautionCode[] => cautionsOf(lines).map(({ code }) => code);
const found = (lines: string, code: CautionCode): Caution | undefined =>
  cautionsOf(lines).find((caution) => caution.code === code);

const STRONG = 'station: { level: 1.4 V }\n';
const POWER = 'plate: { supply: 180 V, load: 20k, bypass: 470p }';
const NO_BYPASS = 'output: { load capacitance: 0 }\nplate: { bypass: 0 }\ndetector: { tube: 6SN7-GT }';

/** What raises a caution, and its neighbour in one value that does not. */
const PAIRS: readonly (readonly [CautionCode, string, string])[] = [
  ['shock', 'plate: { supply: 45 V }', 'plate: { supply: 44 V }'],
  ['phones-in-plate', 'plate: { load: phones }', 'plate: { load: choke }'],
  ['plate-volts', 'plate: { load: transformer, supply: 310 V }', 'plate: { load: transformer, supply: 300 V }'],
  ['plate-watts', 'plate: { load: transformer, supply: 250 V }', 'plate: { load: transformer, supply: 200 V }'],
  [
    'resistor-watts',
    'detector: { tube: 12AU7 }\nplate: { load: 20k, supply: 180 V }',
    'detector: { tube: 12AU7 }\nplate: { load: 470k, supply: 180 V }',
  ],
  [
    'resistor-watts',
    'plate: { load: transformer, dropping resistor: 100k, supply: 300 V }',
    'plate: { load: transformer, dropping resistor: 100k, supply: 90 V }',
  ],
  [
    'winding-amps',
    'plate: { load: transformer early 1:5, supply: 150 V }',
    'plate: { load: transformer good 1:3, supply: 150 V }',
  ],
  [
    'winding-amps',
    'detector: { tube: 76 }\nplate: { load: choke large, supply: 120 V }',
    'detector: { tube: 76 }\nplate: { load: choke small, supply: 120 V }',
  ],
  ['battery-life', 'plate: { battery capacity: 500 mAh }', 'plate: { battery capacity: none }'],
  ['next-grid-volts', 'fault: leaky coupling 2M', 'fault: none'],
  [
    'next-grid-volts',
    'fault: leaky coupling 2M\noutput: { into: next grid }',
    'fault: leaky coupling 2M\noutput: { into: crystal earpiece }',
  ],
  ['small-grid-capacitor', 'detector: { grid capacitor: 82p }', 'detector: { grid capacitor: 100p }'],
  [
    'slope-limit',
    `${STRONG}detector: { tube: 12AU7, leak: 2M, grid capacitor: 100p }\n${POWER}`,
    `${STRONG}detector: { tube: 12AU7, leak: 250k, grid capacitor: 100p }\n${POWER}`,
  ],
  [
    'slope-limit',
    `${STRONG}detector: { tube: 12AU7, leak: 2M, grid capacitor: 100p }\n${POWER}`,
    `station: { level: 50 mV }\ndetector: { tube: 12AU7, leak: 2M, grid capacitor: 100p }\n${POWER}`,
  ],
  [
    'carrier-on-plate',
    `${STRONG}detector: { tube: 12AU7 }\nplate: { supply: 180 V, load: 20k, bypass: 470p }`,
    `${STRONG}detector: { tube: 12AU7 }\nplate: { supply: 180 V, load: 20k, bypass: 680p }`,
  ],
  [
    'carrier-on-plate',
    `${STRONG}detector: { tube: 12AU7 }\n${POWER}`,
    `${STRONG}detector: { tube: 12AU7 }\n${POWER}\noutput: { into: crystal earpiece }`,
  ],
  [
    'ripple',
    'station: { carrier: 530k }\ndetector: { leak: 220k, grid capacitor: 150p }',
    'station: { carrier: 530k }\ndetector: { leak: 220k, grid capacitor: 180p }',
  ],
  [
    'plate-harmonic',
    `station: { level: 0.5 V, carrier: 530k }\n${NO_BYPASS}`,
    `station: { level: 0.5 V, carrier: 530k }\n${NO_BYPASS.replace('bypass: 0', 'bypass: 100p')}`,
  ],
  [
    'bare-plate',
    'station: { level: 0.5 V }\nplate: { bypass: 0 }\ndetector: { tube: 6SN7-GT }',
    'station: { level: 0.5 V }\nplate: { bypass: 47p }\ndetector: { tube: 6SN7-GT }',
  ],
  [
    'little-bypass',
    'station: { level: 0.15 V }\nplate: { bypass: 39p }',
    'station: { level: 0.15 V }\nplate: { bypass: 47p }',
  ],
  [
    'little-bypass',
    'station: { level: 0.15 V }\nplate: { bypass: 39p }',
    'station: { level: 0.1 V }\nplate: { bypass: 39p }',
  ],
  ['slow-carrier', 'station: { carrier: 150k }', 'station: { carrier: 160k }'],
  [
    'outside-rows',
    'detector: { tube: 76 }\nplate: { supply: 45 V }',
    'detector: { tube: 76 }\nplate: { supply: 90 V }',
  ],
  [
    'outside-rows',
    'detector: { tube: 30 }\nplate: { supply: 400 V }',
    'detector: { tube: 30 }\nplate: { supply: 300 V }',
  ],
  [
    'peak-clipping',
    'station: { level: 5 V }\ndetector: { kind: diode, diode load: 500k }',
    'station: { level: 5 V }\ndetector: { kind: diode, diode load: 100k }',
  ],
  [
    'slope-limit',
    'station: { level: 5 V }\ndetector: { kind: diode, diode bypass: 500p }\noutput: { load resistance: 50M }',
    'station: { level: 5 V }\ndetector: { kind: diode, diode bypass: 100p }\noutput: { load resistance: 50M }',
  ],
  [
    'resistor-watts',
    'detector: { kind: infinite impedance, cathode resistor: 2k, tube: 6SN7-GT }\nplate: { supply: 500 V }',
    'detector: { kind: infinite impedance, cathode resistor: 47k, tube: 6SN7-GT }\nplate: { supply: 500 V }',
  ],
  [
    'next-grid-volts',
    'detector: { kind: infinite impedance }\nfault: leaky coupling 500k',
    'detector: { kind: infinite impedance }',
  ],
  ['phones-in-plate', 'plate: { load: phones }', 'plate: { load: phones }\ndetector: { kind: infinite impedance }'],
  ['shock', 'detector: { kind: plate bend }', 'detector: { kind: diode }'],
  ['textbook', 'detector: { law: square }', 'detector: { law: tube }'],
];

describe('cautions', () => {
  it.each(PAIRS)('%s: raised by "%s", not by "%s"', (code, raises, neighbour) => {
    expect(codes(raises)).toContain(code);
    expect(codes(neighbour)).not.toContain(code);
  });

  it('a sound set within the rows of its tube gets none but the one about its supply', () => {
    expect(codes('detector: { tube: 30, leak returns to: filament + }\nplate: { supply: 45 V }')).toEqual(['shock']);
  });

  it('what can hurt comes first', () => {
    expect(codes('plate: { load: phones }\nstation: { carrier: 150k }').slice(0, 2)).toEqual([
      'shock',
      'phones-in-plate',
    ]);
  });

  it('a bypass that is not heard is told of, one that is heard is not', () => {
    const codesOf = (lines: string): CautionCode[] => {
      const [variant] = listVariants(`tuned circuit: { loaded Q: 40 }\n${lines}`, 'set.yaml');
      return analyse(variant!.circuit).cautions.map(({ code }) => code);
    };
    const earpiece = 'output: { into: ceramic earpiece, coupling: 100n }\nplate: { load: 47k, bypass: ';
    expect(codesOf(`${earpiece}100p }`)).toContain('bypass-inaudible');
    expect(codesOf(`${earpiece}10n }`)).not.toContain('bypass-inaudible');
  });
});

describe('their figures', () => {
  it('watts, amperes and hours are those of the rest point', () => {
    const lines = (more: string): string =>
      `detector: { tube: 12AU7 }\nplate: { load: 20k, supply: 180 V, dropping resistor: 1k${more} }`;
    const { circuit } = listVariants(`tuned circuit: { loaded Q: 40 }\n${lines('')}`, 'set.yaml')[0]!;
    const { plateVolts, currents } = restPoint(circuit);
    const watts = found(lines(''), 'resistor-watts')!;
    // 20 kΩ of the 21 kΩ that share the drop
    expect(watts.figure / (((20 / 21) * (180 - plateVolts)) ** 2 / 20e3)).toBeCloseTo(1, 9);
    // the next of 1/4, 1/2, 1, 2, 5 W above twice as much: common practice, no source
    expect(watts.further).toBe([0.25, 0.5, 1, 2, 5].find((rating) => rating >= 2 * watts.figure));
    const battery = found(lines(', battery capacity: 1.2 Ah'), 'battery-life')!;
    expect(battery.limit).toBe(1.2);
    expect(battery.figure).toBeCloseTo(currents.plateAmps, 12);
    expect(battery.further! * battery.figure).toBeCloseTo(1.2, 12);
  });

  it('more than five watts has no resistor', () => {
    const watts = found('detector: { tube: 6SN7-GT }\nplate: { load: 5k, supply: 500 V }', 'resistor-watts')!;
    expect([watts.figure > 2.5, watts.further]).toEqual([true, 0]);
  });

  it("a winding's own inductance without a current has no rating, with one it has that", () => {
    const load = (more: string): string =>
      `plate: { supply: 200 V, load: { kind: transformer, primary inductance: 30 H${more} } }`;
    expect(codes(load(''))).not.toContain('winding-amps');
    const rated = found(load(', at current: 1 mA, inductance at current: 20 H'), 'winding-amps')!;
    expect([rated.limit, rated.name]).toEqual([1e-3, 'transformer']);
    expect(rated.source).toMatch(/the list knows/);
  });

  it("the grid's capacitance at the carrier is grid to cathode and grid to plate, where the bypass is a short", () => {
    const circuit = gridLeak({ bypassFarads: 100e-9 });
    const { gridCathodeFarads, gridPlateFarads } = circuit.tube;
    // 0.5 %: a bypass of 1.6 Ω leaves some thousandths of the carrier on the plate
    expect(gridFarads(restPoint(circuit)) / (gridCathodeFarads + gridPlateFarads)).toBeCloseTo(1, 2);
  });

  it('the carrier lost in a small grid capacitor is that of the divider', () => {
    // a far grid return keeps the grid from conducting, so that capacitances alone divide
    const circuit = gridLeak({ gridCapacitorFarads: 20e-12, bypassFarads: 100e-9, leakReturnVolts: -3 });
    const rest = restPoint(circuit);
    const [caution] = restCautions(rest, null).filter(({ code }) => code === 'small-grid-capacitor');
    const input = circuit.tube.gridCathodeFarads + circuit.tube.gridPlateFarads;
    expect(caution!.figure).toBe(20e-12);
    expect(caution!.limit / (10 * input)).toBeCloseTo(1, 2);
    // 0.02 dB: the bypass is no perfect short
    expect(Math.abs(caution!.further! - 20 * Math.log10(1 + input / 20e-12))).toBeLessThan(0.02);
  });

  it('the carrier on the next grid is that of the plate through the coupling, and the bypass named brings it down', () => {
    const rest = restPoint(gridLeak({ levelVoltsRms: 1, plateOhms: 20e3, bypassFarads: 100e-12, loadFarads: 100e-12 }));
    const onPlate = rest.tuned.carrierPeakVolts * Math.hypot(rest.phasors.plate.re, rest.phasors.plate.im);
    // 10 nF into 100 pF
    expect(carrierAtOutputVoltsRms(rest) / (onPlate / Math.SQRT2)).toBeCloseTo(100 / 101, 4);
    const lines = (bypass: string): string =>
      `${STRONG}detector: { tube: 12AU7 }\nplate: { supply: 180 V, load: 20k, bypass: ${bypass} }`;
    const caution = found(lines('100p'), 'carrier-on-plate')!;
    expect(codes(lines(String(caution.further)))).not.toContain('carrier-on-plate');
  });
});

describe('the slope limit', () => {
  /** A strong carrier on an ideal rectifier, no plate fed back: the case the textbook's rule is for. */
  const textbook = (leakOhms: number, farads: number, modulation: number): DetectorCircuit => {
    const circuit = gridLeak({
      law: 'linear',
      levelVoltsRms: 5,
      leakOhms,
      gridCapacitorFarads: farads,
      modulation,
      tunedCircuit: stiff(2),
    });
    return { ...circuit, tube: { ...circuit.tube, gridPlateFarads: 0, gridCathodeFarads: 0 } };
  };

  // R·C ≤ √(1 − m²)/(m·ω): F. E. Terman, Radio Engineers' Handbook, 1943, section 7, from memory; also
  // https://newbedev.com/rc-time-constant-and-diode-detector, seen
  it.each([
    [2e6, 250e-12, 0.8],
    [2e6, 250e-12, 0.3],
    [1e6, 100e-12, 0.8],
    [1e6, 100e-12, 0.9],
    [250e3, 100e-12, 0.9],
  ])('%d Ω with %d F at depth %d is the textbook’s frequency', (leakOhms, farads, depth) => {
    const rule = Math.sqrt(1 - depth * depth) / (depth * 2 * Math.PI * leakOhms * farads);
    // 5 %: a rectifier of a thousandth of the leak follows the crests with 98 %, so it swings less, and is followed further
    expect(followedHertz(restPoint(textbook(leakOhms, farads, depth)))! / rule).toBeGreaterThan(0.98);
    expect(followedHertz(restPoint(textbook(leakOhms, farads, depth)))! / rule).toBeLessThan(1.05);
  });

  // 2 MΩ with 250 pF follows 30 % at 1 kHz and no more: 1/√(1 + (ωRC)²) = 0.303
  it('2 MΩ with 250 pF just passes the standard depth of 30 % at 1 kHz', () => {
    const rest = restPoint(textbook(2e6, 250e-12, 0.3));
    const depth = 1 / chargingSwing(rest, new LinearResponse(rest), 1000)!;
    // 5 % as above
    expect(Math.abs(depth / 0.303 - 1)).toBeLessThan(0.05);
  });

  // m_max = R_ac/R_dc: F. Langford-Smith, Radiotron Designer's Handbook, 4th ed., chapter 27, from memory
  it.each([
    ['1 MΩ', 500e3, 1 / (1 / 500e3 + 1 / 1e6)],
    ['1 MΩ', 100e3, 1 / (1 / 100e3 + 1 / 1e6)],
  ])('a diode that feeds %s from %d Ω follows R_ac/R_dc', (following, ohms, ac) => {
    const text =
      'station: { level: 10 V }\ntuned circuit: { loaded Q: 10 }\n' +
      `detector: { kind: diode, diode load: ${ohms}, diode bypass: 20p }\n` +
      `output: { load resistance: ${following}, load capacitance: 0, coupling: 100n }`;
    const rest = restPoint(listVariants(text, 'set.yaml')[0]!.circuit);
    // 3 %: a diode of some kilohms stands a hundredth below the carrier's crests
    expect(Math.abs(followedDepth(rest, 400)! / (ac / ohms) - 1)).toBeLessThan(0.03);
  });

  it('no modulation, or a weak signal whose grid conducts throughout, has none', () => {
    expect(followedHertz(restPoint(textbook(2e6, 250e-12, 0)))).toBeNull();
    expect(followedHertz(restPoint(gridLeak({ levelVoltsRms: 0.02, modulation: 1 })))).toBeNull();
  });
});
